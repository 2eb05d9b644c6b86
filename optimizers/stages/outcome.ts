import { hypervolume } from '../front/hypervolume.js';
import { atLevel, levelsOf } from '../front/levels.js';
import type { EvaluatedPoint, Goal } from '../problem/contract.js';
import type { Judgement } from '../problem/judge.js';
import type { JudgedPoint } from '../tasks/recorder.js';
import type { Knowledge } from './contract.js';

export interface FrontLevel {
  /** Brightness asked for. */
  readonly level: number;
  /** Least impurity with at least that brightness; null when the level is out of reach. */
  readonly point: EvaluatedPoint | null;
}

export interface StageReport {
  readonly name: string;
  readonly tasks: number;
  readonly evaluations: number;
  /** Hypervolume of the archive after the stage, against the reference of `SearchOutcome.hypervolume`. */
  readonly hypervolume: number;
}

export interface SearchOutcome {
  readonly kind: 'finished' | 'interrupted';
  readonly evaluations: number;
  /** Every non-dominated evaluation, sorted by brightness. */
  readonly archive: readonly EvaluatedPoint[];
  readonly front: readonly FrontLevel[];
  /** Where no evaluation meets the limits of the goal: the one that comes nearest; null otherwise. */
  readonly nearest: EvaluatedPoint | null;
  /** At `goal.atLeast`; null when no level is set or it is out of reach. */
  readonly best: EvaluatedPoint | null;
  readonly hypervolume: {
    readonly value: number;
    readonly reference: { readonly impurity: number; readonly brightness: number };
    readonly meaning: string;
  };
  readonly stages: readonly StageReport[];
}

/** The archive after a stage. */
export interface Milestone {
  readonly name: string;
  readonly tasks: number;
  readonly evaluations: number;
  readonly front: readonly Judgement[];
}

const plain = (point: JudgedPoint | null): EvaluatedPoint | null =>
  point === null ? null : { values: point.values, figures: point.figures };

/**
 * The corner that hypervolumes count from: the lowest level of the front, and the impurity at its highest level that
 * was reached.
 */
function referenceOf(goal: Goal, front: readonly JudgedPoint[], levels: readonly number[]): Judgement {
  const brightest = front[front.length - 1];
  if (brightest === undefined) return { impurity: 0, brightness: goal.front.from ?? 0 };
  const top = atLevel(front, levels[levels.length - 1]) ?? brightest;
  return { impurity: top.impurity, brightness: levels[0] };
}

function volume(front: readonly Judgement[], reference: Judgement): number {
  const points = front.map(({ impurity, brightness }) => [impurity, -brightness]);
  return hypervolume(points, [reference.impurity, -reference.brightness]);
}

/** What a search hands over, finished or not. */
export function outcomeOf(
  kind: SearchOutcome['kind'],
  known: Knowledge,
  milestones: readonly Milestone[],
): SearchOutcome {
  const { goal } = known.spec;
  const { front } = known;
  const levels = levelsOf(goal.front, front);
  const reference = referenceOf(goal, front, levels);
  return {
    kind,
    evaluations: known.spent,
    archive: front.map((point) => ({ values: point.values, figures: point.figures })),
    front: levels.map((level) => ({ level, point: plain(atLevel(front, level)) })),
    nearest: front.length > 0 ? null : known.nearest.point,
    best: goal.atLeast === null ? null : plain(atLevel(front, goal.atLeast)),
    hypervolume: {
      value: volume(front, reference),
      reference,
      meaning:
        `area between the front and the corner at collected.${goal.impurity} = ${reference.impurity} and ` +
        `signal.${goal.brightness} = ${reference.brightness}, in the units of the two figures`,
    },
    stages: milestones.map(({ name, tasks, evaluations, front: then }) => ({
      name,
      tasks,
      evaluations,
      hypervolume: volume(then, reference),
    })),
  };
}
