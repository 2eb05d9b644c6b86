import { hypervolume } from '../front/hypervolume.js';
import { atLevel, levelsOf } from '../front/levels.js';
import { sliceBounds, sliceOf } from '../front/slices.js';
import type { EvaluatedPoint, Goal } from '../problem/contract.js';
import { type Judgement, objectivesOf } from '../problem/judge.js';
import { thirdAxes, turned } from '../problem/third.js';
import { EXACT_TOLERANCE } from '../tasks/correct.js';
import type { JudgedPoint } from '../tasks/recorder.js';
import type { Knowledge } from './contract.js';
import { CORRECTION } from './correct.js';
import { type Restarts, restartsOf } from './restarts.js';

/** A member of the archive. */
export interface FoundPoint extends EvaluatedPoint {
  /** Stage that found it first. */
  readonly stage: string;
}

export interface FrontLevel {
  /** Brightness asked for. */
  readonly level: number;
  /** Bound of the third axis, in the unit of its figure; null for none. */
  readonly slice: number | null;
  /** Least impurity with at least that brightness within the slice; null when the level is out of reach. */
  readonly point: FoundPoint | null;
}

export interface StageReport {
  readonly name: string;
  readonly tasks: number;
  readonly evaluations: number;
  /** The exact phonon method took over from a cheap one: the archive began anew. */
  readonly corrects?: boolean;
  /** Hypervolume of the archive after the stage, against the reference of `SearchOutcome.hypervolume`. */
  readonly hypervolume: number;
}

export interface SearchOutcome {
  readonly kind: 'finished' | 'interrupted';
  readonly evaluations: number;
  /** Every non-dominated evaluation, sorted by brightness. */
  readonly archive: readonly FoundPoint[];
  /** Slice after slice, the tightest first; by brightness within each. */
  readonly front: readonly FrontLevel[];
  /** Where no evaluation meets the limits of the goal: the one that comes nearest; null otherwise. */
  readonly nearest: EvaluatedPoint | null;
  /** At `goal.atLeast`; null when no level is set or it is out of reach. */
  readonly best: FoundPoint | null;
  readonly hypervolume: {
    readonly value: number;
    readonly reference: {
      readonly impurity: number;
      readonly brightness: number;
      /** In the unit of the figure; null for two objectives. */
      readonly third: number | null;
    };
    readonly meaning: string;
  };
  readonly stages: readonly StageReport[];
  /** How often solves that began elsewhere found the front again (without a bound on a third axis); null without solves. */
  readonly restarts: { readonly all: Restarts | null; readonly best: Restarts | null };
  /**
   * Where the front was searched by a cheap phonon method and then corrected by the exact one, whose figures front and
   * archive hold: the relative tolerance, the levels corrected, and how many of them settled to it. Null elsewhere.
   */
  readonly correction: {
    readonly tolerance: number;
    readonly levels: number;
    readonly settled: number;
  } | null;
}

/** The archive after a stage. */
export interface Milestone {
  readonly name: string;
  readonly tasks: number;
  readonly evaluations: number;
  readonly front: readonly Judgement[];
}

const plain = (point: JudgedPoint | null): FoundPoint | null =>
  point === null ? null : { values: point.values, figures: point.figures, stage: point.stage };

/**
 * The corner that hypervolumes count from: the lowest level of the front, the impurity at its highest level that was
 * reached, and the largest third number that the front has.
 */
function referenceOf(
  goal: Goal,
  front: readonly JudgedPoint[],
  chosen: readonly (JudgedPoint | null)[],
  levels: readonly number[],
): Judgement {
  const third = goal.third === null ? null : 0;
  const brightest = front[front.length - 1];
  if (brightest === undefined) return { impurity: 0, brightness: goal.front.from ?? 0, third };
  const top = atLevel(front, levels[levels.length - 1]) ?? brightest;
  const reached = [top, ...chosen.filter((point) => point !== null)];
  return {
    impurity: Math.max(...reached.map(({ impurity }) => impurity)),
    brightness: levels[0],
    third:
      third === null ? null : Math.max(...reached.map((point) => point.third ?? Number.NEGATIVE_INFINITY)),
  };
}

const volume = (points: readonly Judgement[], reference: Judgement): number =>
  hypervolume(points.map(objectivesOf), objectivesOf(reference));

function meaningOf(goal: Goal, { impurity, brightness }: Judgement, third: number | null): string {
  const corner = [
    `collected.${goal.impurity} = ${impurity}`,
    ...(goal.third === null ? [] : [`${thirdAxes[goal.third.axis].figure} = ${third}`]),
    `signal.${goal.brightness} = ${brightness}`,
  ];
  const what = goal.third === null ? 'area' : 'volume';
  return `${what} between the front and the corner at ${listed(corner)}, in the units of the figures`;
}

const listed = (parts: readonly string[]): string => `${parts.slice(0, -1).join(', ')} and ${parts.at(-1)}`;

/** The front slice by slice: the least impurity at each level within each bound. */
function levelsWithin(
  known: Knowledge,
  levels: readonly number[],
): (FrontLevel & { judged: JudgedPoint | null })[] {
  const { third } = known.spec.goal;
  const points = known.archive.points;
  const bounds = known.bounds ?? sliceBounds(known.spec.goal, points);
  return bounds.flatMap((slice) => {
    const front = sliceOf(points, slice === null || third === null ? null : turned(slice, third.axis));
    return levels.map((level) => {
      const judged = atLevel(front, level);
      return { level, slice, judged, point: plain(judged) };
    });
  });
}

/** The levels with the one at which the best design is asked for, so that each slice has one there. */
const withLevel = (levels: readonly number[], level: number | null): number[] =>
  level === null || levels.includes(level) ? [...levels] : [...levels, level].sort((a, b) => a - b);

const byBrightness = (a: Judgement, b: Judgement): number =>
  a.brightness - b.brightness || a.impurity - b.impurity;

/** Levels of the front; of a corrected one those that it was corrected at, as far as they were asked for or are reached. */
function levelsFor({ spec, front, corrected }: Knowledge): number[] {
  if (corrected === null) return levelsOf(spec.goal.front, front);
  const reach = front.length === 0 ? 0 : front[front.length - 1].brightness;
  return corrected.levels.filter((level) => spec.goal.front.to !== null || level <= reach);
}

function correctionOf({ corrected }: Knowledge): SearchOutcome['correction'] {
  if (corrected === null) return null;
  const { corrections } = corrected;
  const settled = corrections.filter((c) => c.settled).length;
  return { tolerance: EXACT_TOLERANCE, levels: corrections.length, settled };
}

/** What a search hands over, finished or not. */
export function outcomeOf(
  kind: SearchOutcome['kind'],
  known: Knowledge,
  milestones: readonly Milestone[],
): SearchOutcome {
  const { goal } = known.spec;
  const { front } = known;
  const levels = levelsFor(known);
  const chosen = levelsWithin(known, goal.third === null ? levels : withLevel(levels, goal.atLeast));
  const reference = referenceOf(
    goal,
    front,
    chosen.map(({ judged }) => judged),
    levels,
  );
  const third = goal.third && reference.third !== null ? turned(reference.third, goal.third.axis) : null;
  const archive = known.archive.points;
  return {
    kind,
    evaluations: known.spent,
    archive: [...archive]
      .sort(byBrightness)
      .map(({ values, figures, stage }) => ({ values, figures, stage })),
    front: chosen.map(({ level, slice, point }) => ({ level, slice, point })),
    nearest: front.length > 0 ? null : known.nearest.point,
    best: goal.atLeast === null ? null : plain(atLevel(front, goal.atLeast)),
    hypervolume: {
      value: volume(archive, reference),
      reference: { impurity: reference.impurity, brightness: reference.brightness, third },
      meaning: meaningOf(goal, reference, third),
    },
    stages: milestones.map(({ name, tasks, evaluations, front: then }) => ({
      name,
      tasks,
      evaluations,
      corrects: known.corrected !== null && name.startsWith(CORRECTION),
      hypervolume: volume(then, reference),
    })),
    restarts: known.corrected?.restarts ?? {
      all: restartsOf(known, null),
      best: goal.atLeast === null ? null : restartsOf(known, goal.atLeast),
    },
    correction: correctionOf(known),
  };
}
