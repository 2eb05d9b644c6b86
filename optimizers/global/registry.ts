import type { Method } from '../local/contract.js';
import { controlledRandomSearch } from './controlled-random-search.js';
import { differentialEvolution } from './differential-evolution.js';
import { mutationSearch } from './mutation-search.js';
import { nsga2 } from './nsga2.js';

/** Every global method, by name: they search the whole cube. */
export const globalMethods: ReadonlyMap<string, Method> = new Map(
  [differentialEvolution(), controlledRandomSearch(), mutationSearch, nsga2()].map((method) => [
    method.name,
    method,
  ]),
);
