import { stream } from '../../core/numerics/stream.js';
import { sliceBounds } from '../front/slices.js';
import type { Knowledge, Plan } from './contract.js';
import { explore } from './explore.js';

/** Share of the budget that populations spend on all three objectives at once. */
const LOOK = 0.1;
/** Evaluations that make a slice worth a search of its own. */
const SLICE_WORTH = 50;

/** A strategy for two objectives within a bound of the third axis (null: none); its evaluations count for both. */
function* within(
  known: Knowledge,
  name: string,
  bound: number | null,
  budget: number,
  strategy: (known: Knowledge) => Plan,
): Plan {
  const inner = known.within(bound, name, budget, stream(known.spec.search.seed, known.spent).int(2 ** 32));
  const steps = strategy(inner);
  for (let step = steps.next(); !step.done; ) {
    const { name: stage, tasks } = step.value;
    const results = yield {
      name: `${name}/${stage}`,
      tasks: tasks.map((task) => ({ ...task, within: { bound } })),
    };
    for (const result of results) {
      inner.absorb(result);
      inner.spent += result.evaluations;
    }
    step = steps.next(results);
  }
  if (bound === null) known.solutions.push(...inner.solutions);
}

/**
 * Three objectives: populations look at all of them at once; then the strategy for two runs without a bound on the
 * third and within ever tighter ones (ε-constraints: Haimes, Lasdon & Wismer, IEEE Trans. Syst. Man Cybern. 1, 296
 * (1971)), each beginning with what is known within its bound.
 */
export function* slices(known: Knowledge, strategy: (known: Knowledge) => Plan): Plan {
  const { third } = known.spec.goal;
  if (third === null) return yield* strategy(known);
  yield* explore(known, 'explore', Math.floor(LOOK * known.left));
  if (known.left < SLICE_WORTH * third.slices) return yield* explore(known, 'explore-on', known.left);
  yield* within(known, 'open', null, Math.floor(known.left / third.slices), strategy);
  known.bounds = sliceBounds(known.spec.goal, known.archive.points);
  const inner = known.bounds.filter((bound) => bound !== null);
  for (let i = inner.length - 1; i >= 0; i--) {
    yield* within(known, `slice-${i + 1}`, inner[i], Math.floor(known.left / (i + 1)), strategy);
  }
}
