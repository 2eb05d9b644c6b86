import {
  type Design,
  type DriftSpec,
  designAtDrift,
  evaluate,
  type Figures,
  PropagationError,
  stream,
} from '../../core/index.js';
import { type Goal, infeasible, judge, limitStates, type Verdict } from '../../optimizers/index.js';

/** The drifts that can be looked at one by one. */
export const DRIFTS = ['area', 'width', 'detuning', 'filterCenter'] as const;
export type DriftName = (typeof DRIFTS)[number];

/** Beyond these rms values a drift is no drift any more, or not allowed in a study; filter centre in filter widths. */
export const MOST = { area: 0.5, width: 0.15, detuning: 2, filterCenter: 2 } as const;
/** Where the search for the largest rms begins. */
const FIRST = { area: 1e-3, width: 1e-3, detuning: 1e-4, filterCenter: 1e-3 } as const;
/** Relative width of the bracket that bisection ends with. */
const BRACKET = 2e-3;

/** What a design has to keep under drift. */
export interface Demand {
  readonly goal: Goal;
  /** Null: any. */
  readonly brightness: number | null;
  readonly impurity: number | null;
}

export interface Finding {
  readonly verdict: Verdict;
  readonly figures: Figures | null;
  /** What is missed, by name; empty when the demand is met. */
  readonly missed: readonly string[];
}

const NONE: DriftSpec = { area: 0, width: 0, detuning: 0, filterCenter: 0, quantile: null };

/** Only one of the drifts, with another rms. */
export const alone = (drift: DriftSpec | null, name: DriftName, rms: number): DriftSpec => ({
  ...NONE,
  quantile: drift?.quantile ?? null,
  [name]: rms,
});

/** Every drift of a study times a factor. */
export function scaled(drift: DriftSpec, factor: number): DriftSpec {
  const { area, detuning, filterCenter, quantile } = drift;
  const width = Math.min(factor * drift.width, MOST.width);
  return {
    area: factor * area,
    width,
    detuning: factor * detuning,
    filterCenter: factor * filterCenter,
    quantile,
  };
}

const isStill = (drift: DriftSpec) => DRIFTS.every((name) => drift[name] === 0);

/** Judges a design as it stands. */
export function assess(design: Design, demand: Demand, accuracy: 'search' | 'quoted' = 'search'): Finding {
  const { goal, brightness, impurity } = demand;
  let figures: Figures;
  try {
    figures = evaluate(design, accuracy);
  } catch (error) {
    if (!(error instanceof PropagationError)) throw error;
    return { verdict: infeasible(goal), figures: null, missed: ['propagation'] };
  }
  const verdict = judge(figures, goal);
  const missed: string[] = [];
  if (brightness !== null && !(verdict.brightness >= brightness)) missed.push(`signal.${goal.brightness}`);
  if (impurity !== null && !(verdict.impurity <= impurity)) missed.push(`collected.${goal.impurity}`);
  for (const { limit, constraint } of limitStates(figures, goal.limits))
    if (constraint > 0) missed.push(limit.figure);
  return { verdict, figures, missed };
}

export const withDrift = (design: Design, drift: DriftSpec): Design => ({
  ...design,
  drift: isStill(drift) ? null : drift,
});

export interface Yield {
  readonly share: number;
  readonly standardError: number;
  readonly samples: number;
  readonly seed: number;
}

/** Share of seeded Gaussian samples of the drift whose design meets the demand, each by itself. */
export function yieldOf(
  design: Design,
  drift: DriftSpec,
  demand: Demand,
  samples: number,
  seed: number,
): Yield {
  const random = stream(seed, 0);
  let met = 0;
  for (let i = 0; i < samples; i++) {
    const [area, width, shift, center] = DRIFTS.map((name) => drift[name] * random.normal());
    const sample = designAtDrift(design, { area, width, shift, center });
    if (assess(sample, demand).missed.length === 0) met++;
  }
  const share = met / samples;
  return { share, standardError: Math.sqrt((share * (1 - share)) / samples), samples, seed };
}

export interface Largest {
  readonly drift: DriftName;
  /** Rms up to which the demand is met; null when it is not met without drift. */
  readonly rms: number | null;
  /** What is missed just beyond it; empty where nothing was up to the largest rms tried. */
  readonly missedBeyond: readonly string[];
}

/** The largest rms of one drift alone up to which a design meets its demand: doubling, then bisection. */
export function largestRms(design: Design, name: DriftName, demand: Demand): Largest {
  const unit = name === 'filterCenter' ? (design.collection.filter?.fwhm ?? 1) : 1;
  const at = (rms: number) => assess(withDrift(design, alone(design.drift, name, rms)), demand).missed;
  const still = at(0);
  if (still.length > 0) return { drift: name, rms: null, missedBeyond: still };
  const most = MOST[name] * unit;
  let good = 0;
  let bad = FIRST[name] * unit;
  let missed = at(bad);
  while (missed.length === 0) {
    if (bad === most) return { drift: name, rms: most, missedBeyond: [] };
    good = bad;
    bad = Math.min(2 * bad, most);
    missed = at(bad);
  }
  while (bad - good > BRACKET * bad) {
    const middle = (good + bad) / 2;
    const found = at(middle);
    if (found.length === 0) good = middle;
    else [bad, missed] = [middle, found];
    if (bad < 1e-6 * FIRST[name] * unit) return { drift: name, rms: 0, missedBeyond: missed };
  }
  return { drift: name, rms: good, missedBeyond: missed };
}
