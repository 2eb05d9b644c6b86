import { applyParameters, judge, type Restarts, type SearchOutcome } from '../../../optimizers/index.js';
import type { Study } from '../../study/index.js';
import type { FrontDesign } from '../contract.js';
import { columnOf, inColumn } from '../parameters.js';
import { branchOf } from './branch.js';
import { type Growth, growthOf } from './growth.js';

/** Neighbours on the front that are excited in the same way. */
export interface FrontPart {
  /** Bound of the third axis; null for none. */
  readonly slice: number | null;
  /** Brightness of the first and the last of them. */
  readonly from: number;
  readonly to: number;
  readonly branch: string;
  readonly designs: number;
  /** Stages that found them, in the order of the search. */
  readonly stages: readonly { readonly name: string; readonly designs: number }[];
}

export interface RangeEnd {
  readonly path: string;
  /** The end, in internal units, and which one it is. */
  readonly value: number;
  readonly end: 'from' | 'to';
  readonly designs: number;
}

/** How a front was found and how far it can be trusted. */
export interface Explanation {
  readonly parts: readonly FrontPart[];
  readonly restarts: SearchOutcome['restarts'];
  /** Free ranges at whose end designs of the front lie: a wider range may give better ones. */
  readonly ends: readonly RangeEnd[];
  /** Null where the stages tell no trend. */
  readonly growth: Growth | null;
  /** Why the front is probably not converged; empty where nothing speaks against it. */
  readonly doubts: readonly string[];
}

/** Share of the hypervolume that, when it came in the second half of the evaluations, makes a front doubtful. */
const DOUBTFUL_GAIN = 0.01;

export const percent = (share: number): string => `${Number((100 * share).toPrecision(2))} %`;

function partsOf(study: Study, front: readonly FrontDesign[], order: readonly string[]): FrontPart[] {
  const parts: { slice: number | null; branch: string; points: FrontDesign[] }[] = [];
  for (const point of front) {
    const branch = branchOf(applyParameters(study, point.values));
    const last = parts[parts.length - 1];
    if (last !== undefined && last.branch === branch && last.slice === point.slice) last.points.push(point);
    else parts.push({ slice: point.slice, branch, points: [point] });
  }
  return parts.map(({ slice, branch, points }) => {
    const brightness = points.map(({ figures }) => judge(figures, study.goal).brightness);
    const names = [...new Set(points.map(({ stage }) => stage))];
    names.sort((a, b) => order.indexOf(a) - order.indexOf(b));
    const count = (name: string) => points.filter(({ stage }) => stage === name).length;
    return {
      ...{ slice, branch, designs: points.length },
      from: Math.min(...brightness),
      to: Math.max(...brightness),
      stages: names.map((name) => ({ name, designs: count(name) })),
    };
  });
}

/** Share of a range within which a value counts as its end. */
const AT_END = 1e-6;

function endsOf(study: Study, front: readonly FrontDesign[]): RangeEnd[] {
  return study.parameters.flatMap((parameter, i) => {
    if (parameter.kind === 'list') return [];
    const width = parameter.to - parameter.from;
    return (['from', 'to'] as const).flatMap((end) => {
      const value = parameter[end];
      const designs = front.filter(({ values }) => Math.abs(values[i] - value) <= AT_END * width).length;
      return designs === 0 || width === 0 ? [] : [{ path: parameter.path, value, end, designs }];
    });
  });
}

function doubtsOf(growth: Growth | null, best: Restarts | null): string[] {
  const doubts: string[] = [];
  if (growth !== null && growth.lastHalf > DOUBTFUL_GAIN) {
    doubts.push(
      `the hypervolume was still growing: ${percent(growth.lastHalf)} of it came in the second half of the budget (more than ${percent(DOUBTFUL_GAIN)})`,
    );
  }
  if (best !== null && best.elsewhere === 0)
    doubts.push('the best design was found only once: no local solve began far enough from it to confirm it');
  if (best !== null && best.elsewhere > 0 && best.again === 0)
    doubts.push(
      `the best design was found only once: none of ${best.elsewhere} solves that began elsewhere came to it`,
    );
  return doubts;
}

/**
 * What the data of a search say about its front.
 * @returns null for a study without free parameters, or without any design on the front
 */
export function explain(
  study: Study,
  outcome: SearchOutcome,
  front: readonly FrontDesign[],
): Explanation | null {
  if (study.parameters.length === 0 || front.length === 0) return null;
  const growth = growthOf(outcome.stages);
  const parts = partsOf(
    study,
    front,
    outcome.stages.map(({ name }) => name),
  );
  return {
    ...{ parts, growth, restarts: outcome.restarts, ends: endsOf(study, front) },
    doubts: doubtsOf(growth, outcome.restarts.best),
  };
}

/** An explanation as it stands in front.json. */
export function explanationDocument(explanation: Explanation): unknown {
  const { parts, restarts, growth, ends, doubts } = explanation;
  return {
    parts,
    found_again: restarts,
    twice_the_budget: growth && {
      estimated_gain: growth.byDoubling,
      gain_of_second_half: growth.lastHalf,
      gain_of_quarter_before: growth.quarterBefore,
      meaning:
        'shares of the hypervolume; the first is an estimate from the other two: least if the growth goes on to slow down as it did, most if it goes on as in the second half; null if the first half found nothing of the front',
    },
    at_the_end_of_a_range: ends.map(({ path, value, end, designs }) => ({
      parameter: columnOf(path),
      end,
      value: inColumn(value, path),
      designs,
    })),
    probably_not_converged: doubts,
  };
}
