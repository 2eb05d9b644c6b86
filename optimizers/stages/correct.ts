import { atLevel, levelsOf } from '../front/levels.js';
import { type CorrectInput, type Correction, correctionRound } from '../tasks/correct.js';
import { type Knowledge, type Plan, split } from './contract.js';
import { plan } from './plan.js';
import { restartsOf } from './restarts.js';

/** Largest share of the budget for the correction, and the rounds at each level that it should pay for. */
const SHARE = 0.4;
const ROUNDS = 2;
/** Rounds of one task: what does not settle goes on in the next pass, with its share of what others left. */
const PASS_ROUNDS = 3;
/** Name of the stages that correct. */
export const CORRECTION = 'exact-phonons';

/** Whether the designs are searched by a cheap phonon method where an exact one is to be had. */
function isCheap({ spec }: Knowledge): boolean {
  const { phonons } = spec.design.emitter;
  return phonons !== null && phonons.coupling > 0 && phonons.method !== 'exact';
}

function levelCount({ spec }: Knowledge): number {
  return spec.goal.front.points + (spec.goal.atLeast === null ? 0 : 1);
}

/** Evaluations to keep back from the search for the correction of its front; 0 where there is nothing to correct. */
function correctionReserve(known: Knowledge): number {
  const { space } = known.problem;
  // Fronts with a third axis stay those of the method that the study names.
  if (!isCheap(known) || known.spec.goal.third !== null || space.dimension === 0) return 0;
  const perLevel = ROUNDS * correctionRound(space) + 1;
  return Math.floor(Math.min(SHARE * known.left, levelCount(known) * perLevel));
}

/** Levels that the front is asked for, with the one of the best design. */
function levelsToCorrect({ spec, front }: Knowledge): number[] {
  const levels = levelsOf(spec.goal.front, front);
  const { atLeast } = spec.goal;
  return atLeast === null || levels.includes(atLeast) ? levels : [...levels, atLeast];
}

/**
 * Search with phonons: the front of the cheap method is solved again by the exact one, level by level and side by side;
 * from here on the archive holds exact figures only.
 */
function* correct(known: Knowledge): Plan {
  const { front, spec } = known;
  if (front.length === 0) return;
  const levels = levelsToCorrect(known);
  const starts = levels.flatMap((level) => {
    const member = atLevel(front, level) ?? front[front.length - 1];
    return [{ level, start: known.problem.unitOf(member.values) }];
  });
  const restarts = {
    all: restartsOf(known, null),
    best: spec.goal.atLeast === null ? null : restartsOf(known, spec.goal.atLeast),
  };
  known.forget();
  const ends = new Map<number, Correction>();
  const started = new Set<string>();
  let open: readonly CorrectInput[] = starts;
  for (let pass = 1; open.length > 0 && known.left > 0; pass++) {
    const name = `${CORRECTION}-${pass}`;
    const affordable = open.slice(0, known.left);
    const budgets = split(known.left, affordable.length);
    const most = PASS_ROUNDS * correctionRound(known.problem.space) + 1;
    const tasks = affordable.map((input, i) =>
      known.task(name, 'correct', Math.min(budgets[i], most), input),
    );
    for (const input of affordable) started.add(keyOf(input));
    const results = yield { name, tasks };
    for (const { summary } of results) ends.set((summary as Correction).level, summary as Correction);
    open = [...ends.values()]
      .filter(({ settled }) => !settled)
      .map(({ level, x }) => ({ level, start: x }))
      .filter((input) => !started.has(keyOf(input)));
  }
  const corrections = [...ends.values()];
  known.corrected = { levels: levelsOf(spec.goal.front, front), restarts, corrections };
}

const keyOf = ({ level, start }: CorrectInput): string => `${level} ${start.join(' ')}`;

/** The strategy, with part of the budget kept back for the exact phonon method where the study names a cheaper one. */
export function* planWithCorrection(known: Knowledge): Plan {
  known.reserved = correctionReserve(known);
  const correcting = known.reserved > 0;
  yield* plan(known);
  known.reserved = 0;
  if (correcting) yield* correct(known);
}
