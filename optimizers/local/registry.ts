import type { Method } from './contract.js';
import { movingAsymptotes } from './moving-asymptotes.js';
import { nelderMeadMethod } from './nelder-mead.js';
import { sqp } from './sqp.js';

/** Every local method, by name: they refine the first start. */
export const localMethods: ReadonlyMap<string, Method> = new Map(
  [nelderMeadMethod, sqp(), movingAsymptotes()].map((method) => [method.name, method]),
);
