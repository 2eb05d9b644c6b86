import { take, takeZeros } from './arena.js';
import { CHAIN_STATE, type Chain } from './chain.js';
import type { BlochProblem } from './problem.js';
import { countChain, momentChain, thinnedChain } from './state.js';
import { recordChain, type Stretch } from './tape.js';

/** Weights of figures by target name. */
export type Weights = Readonly<Record<string, number>>;

/** A chain that some scalar depends on, and by each scalar the weights of its first trace, second trace and rest. */
export interface SeededChain {
  readonly chain: Chain;
  /** Its states before the kicks of each stretch. */
  readonly records: readonly Float64Array[];
  readonly weights: readonly (readonly [number, number, number])[];
}

/** Figures of each kind of chain, in the order of its traces; the first trace of the moments is 1 whatever happens. */
const KINDS = [
  { make: momentChain, names: [null, 'mean', 'factorial2'] },
  { make: countChain, names: ['p0', 'p1', 'multiphoton'] },
  { make: thinnedChain, names: ['thinned0', 'thinned1', 'thinnedMultiphoton'] },
] as const;
const KNOWN = new Set<string>(KINDS.flatMap(({ names }) => names.filter((name) => name !== null)));

/** The chains that matter, or null where a scalar depends on a figure that no chain has. */
export function seededChains(
  problem: BlochProblem,
  stretches: readonly Stretch[],
  seeds: readonly Weights[],
): SeededChain[] | null {
  for (const seed of seeds) {
    for (const name in seed) if (seed[name] !== 0 && !KNOWN.has(name)) return null;
  }
  const out: SeededChain[] = [];
  for (const { make, names } of KINDS) {
    let any = false;
    const weights: [number, number, number][] = [];
    for (const seed of seeds) {
      const of = (name: string | null) => (name === null ? 0 : (seed[name] ?? 0));
      const row: [number, number, number] = [of(names[0]), of(names[1]), of(names[2])];
      any ||= row[0] !== 0 || row[1] !== 0 || row[2] !== 0;
      weights.push(row);
    }
    if (!any) continue;
    const chain = make(problem, take(CHAIN_STATE));
    out.push({ chain, weights, records: recordChain(chain, stretches) });
  }
  return out;
}

/** The adjoint of a chain's state after the last kick. */
export function seedAdjoint([first, second, rest]: readonly [number, number, number]): Float64Array {
  const adjoint = takeZeros(CHAIN_STATE);
  adjoint[3] = first;
  adjoint[7] = second;
  adjoint[8] = rest;
  return adjoint;
}
