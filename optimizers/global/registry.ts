import type { Method } from '../local/contract.js';
import { cmaEs } from './cma-es.js';
import { controlledRandomSearch } from './controlled-random-search.js';
import { differentialEvolution } from './differential-evolution.js';
import { moead } from './moead.js';
import { mutationSearch } from './mutation-search.js';
import { nsga2 } from './nsga2.js';

/** Every global method, by name: they search the whole cube. */
export const globalMethods: ReadonlyMap<string, Method> = new Map(
  [differentialEvolution(), cmaEs(), controlledRandomSearch(), mutationSearch, nsga2(), moead()].map(
    (method) => [method.name, method],
  ),
);
