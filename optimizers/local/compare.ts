import type { Reply } from './contract.js';

/** Sum of the violated constraints; 0 when all are met. */
export function violation(reply: Reply): number {
  let sum = 0;
  for (const value of reply.constraints) if (value > 0) sum += value;
  return sum;
}

/**
 * Order of two replies of a single-objective problem, best first: feasible before infeasible, then by objective or by
 * violation (the feasibility rules of Deb, Comput. Methods Appl. Mech. Eng. 186, 311 (2000)).
 */
export function compareReplies(a: Reply, b: Reply): number {
  const va = violation(a);
  const vb = violation(b);
  return va > 0 || vb > 0 ? va - vb : a.objectives[0] - b.objectives[0];
}
