import { stream } from '../../core/numerics/stream.js';
import { atLevel } from '../front/levels.js';
import type { Reply, Setup } from '../local/contract.js';
import { constraintCount } from '../problem/limits.js';
import { type MethodSummary, methodNamed } from '../tasks/method.js';
import { type Knowledge, type Plan, split } from './contract.js';
import { scatter } from './explore.js';
import { evenLevels } from './polish.js';
import { slices } from './slices.js';

/** Evaluations of one task, so that it ends soon. */
const CHUNK = 200;
/** Share of the budget that tells a method for one objective what brightness can be reached. */
const LOOK = 0.1;
const MOST_LEVELS = 12;

/** One method under way on one problem. */
interface Track {
  readonly level: number | null;
  readonly setup: Setup;
  readonly replies: Reply[];
  chunk: number;
  spent: number;
  ended: boolean;
}

function track(known: Knowledge, level: number | null, budget: number, index: number): Track {
  const { spec, problem } = known;
  const { traits } = methodNamed(spec.search.method);
  const limits = constraintCount(spec.goal.limits);
  const member = level === null ? null : (atLevel(known.front, level) ?? known.front[known.front.length - 1]);
  const setup: Setup = {
    space: problem.space,
    objectives: level !== null ? 1 : spec.goal.third === null ? 2 : 3,
    constraints: level === null ? limits : traits.constraints ? limits + 1 : 0,
    start: member === null || member === undefined ? [] : [problem.unitOf(member.values)],
    seed: stream(spec.search.seed, index).int(2 ** 32),
    budget,
    gradient: traits.gradient && traits.constraints && problem.differentiate !== null,
  };
  return { level, setup, replies: [], chunk: CHUNK, spent: 0, ended: budget === 0 };
}

/** Carries every track on, side by side, until each has ended or spent its budget. */
function* advance(known: Knowledge, tracks: readonly Track[]): Plan {
  const { method } = known.spec.search;
  for (let stage = 1; tracks.some(({ ended }) => !ended); stage++) {
    const open = tracks.filter(({ ended }) => !ended);
    const name = `${method}-${stage}`;
    const tasks = open.map(({ level, setup, replies, chunk, spent }) => {
      const budget = Math.min(chunk, setup.budget - spent);
      return known.task(name, 'method', budget, { method, level, setup, replies: [...replies] });
    });
    const results = yield { name, tasks };
    open.forEach((own, i) => {
      const { replies, ended, spent } = results[i].summary as MethodSummary;
      own.replies.push(...replies);
      own.spent += spent;
      own.ended = ended || own.spent >= own.setup.budget;
      // A batch larger than the task: the next one is given room for it.
      if (replies.length === 0) own.chunk *= 2;
    });
  }
}

/**
 * `search.method`: one method of the registries in place of the strategy. One for many objectives searches impurity
 * against brightness with the whole budget; one for a single objective is set on the least impurity at each of several
 * brightness levels, from the best of a first look around.
 */
export function* single(known: Knowledge): Plan {
  const { search, goal } = known.spec;
  if (methodNamed(search.method).traits.objectives === 'many') {
    return yield* advance(known, [track(known, null, known.left, 0)]);
  }
  if (known.spec.goal.third !== null) return yield* slices(known, single);
  yield* scatter(known, 'look', Math.ceil(LOOK * known.left));
  const even = evenLevels(known, Math.min(goal.front.points, MOST_LEVELS));
  const levels = [...new Set([...even, ...(goal.atLeast === null ? [] : [goal.atLeast])])];
  const budgets = split(known.left, Math.max(1, levels.length));
  yield* advance(
    known,
    levels.map((level, i) => track(known, level, budgets[i], i)),
  );
}
