import {
  type Design,
  type Figures,
  figureDifference,
  phononChoice,
  relativeDifference,
} from '../../core/index.js';
import { type FiguresResult, type Goal, judge, limitStates } from '../../optimizers/index.js';
import type { QuotedDesign } from './finished-run.js';

export const VERIFY_FORMAT = 'pulsewright.verify/1';

/** Brightness and impurity of the goal. */
export interface GoalNumbers {
  readonly brightness: number | null;
  readonly impurity: number | null;
}

/** What a quoted design is worth when it is evaluated anew and independently. */
export interface VerifiedDesign {
  readonly file: string;
  readonly level: number;
  readonly quoted: GoalNumbers & { readonly figures: Figures };
  readonly verified: GoalNumbers & { readonly figures: Figures | null };
  /** Relative difference, verified over quoted − 1; null where a number is missing or zero. */
  readonly change: GoalNumbers;
  /** Whether the verified brightness is the level at least, within the error that the verification leaves. */
  readonly meetsLevel: boolean;
  /** Error that the quoted figures claim, in the measure named by `measure`; null where they claim none. */
  readonly stated: number | null;
  /** Difference found, in the same measure. */
  readonly found: number | null;
  readonly measure: 'largest relative difference of a figure' | 'difference of the emitted mean';
  /** Whether `found` is at most `stated`; null where nothing was stated. */
  readonly keepsAccuracy: boolean | null;
  /** Why the design does not hold, as whole phrases; empty when it does. */
  readonly reasons: readonly string[];
}

/** Share of a level by which rounding may miss it. */
const ROUNDING = 1e-6;
/** What is promised of quoted figures without phonons, see `FigureTree.accuracy`. */
const PROMISED = 1e-6;

function numbersOf(figures: Figures, goal: Goal): GoalNumbers {
  const { signal, collected } = figures.quantile ?? figures;
  return { brightness: signal[goal.brightness], impurity: collected[goal.impurity] };
}

const relative = (from: number | null, to: number | null): number | null =>
  from === null || to === null || from === 0 ? null : to / from - 1;

/**
 * What the quoted figures claim against what was found. Second-order phonon methods claim an error of populations, and
 * only where the rule for `auto` takes the method; every other method an error of all figures.
 */
function accuracyOf(
  design: Design,
  quoted: Figures,
  verified: Figures,
): Pick<VerifiedDesign, 'stated' | 'found' | 'measure'> {
  const { method } = quoted.phonons;
  const own = verified.accuracy.error_estimate;
  if (method === 'none' || method === 'exact') {
    const stated = Math.max(PROMISED, quoted.accuracy.error_estimate) + own;
    return {
      stated,
      // The exact method settles to a relative error, in which p_0 and p_1 are nothing apart.
      found: (method === 'exact' ? relativeDifference : figureDifference)(quoted, verified),
      measure: 'largest relative difference of a figure',
    };
  }
  const choice = phononChoice(design);
  const found = Math.abs(verified.emitted.mean - quoted.emitted.mean);
  const stated = choice?.method === method ? choice.error + own * verified.emitted.mean : null;
  return { stated, found, measure: 'difference of the emitted mean' };
}

/** @param levelled false for a fixed design, whose level is nothing but its own brightness */
export function verdictOf(
  quoted: QuotedDesign,
  design: Design,
  result: FiguresResult,
  goal: Goal,
  levelled: boolean,
): VerifiedDesign {
  const { file, level, figures } = quoted;
  const before = numbersOf(figures, goal);
  const base = { file, level, quoted: { ...before, figures } };
  if (result.figures === null) {
    return {
      ...base,
      verified: { brightness: null, impurity: null, figures: null },
      change: { brightness: null, impurity: null },
      ...{ meetsLevel: false, stated: null, found: null, keepsAccuracy: null },
      measure: 'largest relative difference of a figure',
      reasons: [result.failure],
    };
  }
  const after = numbersOf(result.figures, goal);
  const slack = Math.max(ROUNDING, result.figures.accuracy.error_estimate);
  const meetsLevel = !levelled || (after.brightness !== null && after.brightness >= level * (1 - slack));
  const accuracy = accuracyOf(design, figures, result.figures);
  const { stated, found } = accuracy;
  const keepsAccuracy = stated === null || found === null ? null : found <= stated;
  return {
    ...base,
    verified: { ...after, figures: result.figures },
    change: {
      brightness: relative(before.brightness, after.brightness),
      impurity: relative(before.impurity, after.impurity),
    },
    ...{ meetsLevel, keepsAccuracy, ...accuracy },
    reasons: reasonsOf(result.figures, goal, { level, meetsLevel, keepsAccuracy, ...accuracy }, after),
  };
}

function reasonsOf(
  figures: Figures,
  goal: Goal,
  point: Pick<VerifiedDesign, 'level' | 'meetsLevel' | 'keepsAccuracy' | 'stated' | 'found' | 'measure'>,
  { brightness }: GoalNumbers,
): string[] {
  const reasons: string[] = [];
  if (!point.meetsLevel) {
    reasons.push(`signal.${goal.brightness} is ${brightness ?? 'not known'}; the level is ${point.level}`);
  }
  if (point.keepsAccuracy === false) {
    reasons.push(
      `${point.measure} is ${point.found?.toExponential(1)}; stated was ${point.stated?.toExponential(1)}`,
    );
  }
  const slack = Math.max(ROUNDING, figures.accuracy.error_estimate);
  for (const { limit, value, constraint } of limitStates(figures, goal.limits)) {
    if (constraint > slack) reasons.push(`the limit of ${limit.figure} is missed: ${value}`);
  }
  if (!Number.isFinite(judge(figures, goal).impurity)) {
    reasons.push(['the figures cannot be judged', ...figures.phonons.flags].join('; '));
  }
  return reasons;
}
