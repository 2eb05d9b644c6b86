import type { Design, DriftSpec } from '../../core/index.js';
import type { Study } from '../study/index.js';
import {
  alone,
  assess,
  type Demand,
  DRIFTS,
  type DriftName,
  type Finding,
  type Largest,
  largestRms,
  MOST,
  scaled,
  withDrift,
  type Yield,
  yieldOf,
} from './tolerance-points.js';

export interface ToleranceRequest {
  /** File that the design stands in. */
  readonly path: string;
  readonly study: Study;
  readonly hash: string;
  readonly design: Design;
  readonly demand: Demand;
  readonly samples: number;
  readonly seed: number;
}

/** A design against no drift, one drift, or all that its study states. */
export interface ToleranceCase {
  readonly name: 'none' | DriftName | 'together';
  readonly drift: DriftSpec | null;
  readonly finding: Finding;
}

/** Judged brightness and impurity along the rms of one drift or of all. */
export interface ToleranceSweep {
  readonly name: DriftName | 'together';
  /** Rms at factor 1; that of the study, or else the largest that is tolerated. */
  readonly unit: DriftSpec;
  readonly ofStudy: boolean;
  readonly points: readonly {
    readonly factor: number;
    readonly brightness: number;
    readonly impurity: number;
  }[];
}

export interface ToleranceResult extends ToleranceRequest {
  readonly cases: readonly ToleranceCase[];
  /** Null without drift in the study. */
  readonly yield: Yield | null;
  readonly largest: readonly Largest[];
  readonly sweeps: readonly ToleranceSweep[];
  /** The demand is met with all drift of the study together. */
  readonly met: boolean;
}

const FACTORS = [0, 0.25, 0.5, 0.75, 1, 1.25, 1.5, 2];

/** Everything that the tolerance of a design is told from. */
export function toleranceOf(request: ToleranceRequest): ToleranceResult {
  const { design, demand, samples, seed } = request;
  const { drift } = design;
  const names = DRIFTS.filter((name) => name !== 'filterCenter' || design.collection.filter !== null);
  const stated = names.filter((name) => drift !== null && drift[name] > 0);
  const caseOf = (name: ToleranceCase['name'], own: DriftSpec | null): ToleranceCase => {
    const at = own === null ? { ...design, drift: null } : withDrift(design, own);
    return { name, drift: own, finding: assess(at, demand, 'quoted') };
  };
  const cases = [
    caseOf('none', null),
    ...(drift === null ? [] : stated.map((name) => caseOf(name, alone(drift, name, drift[name])))),
    ...(drift !== null && stated.length > 1 ? [caseOf('together', drift)] : []),
  ];
  const largest = names.map((name) => largestRms(design, name, demand));
  const sweeps = [
    ...largest.flatMap((found) => sweepOf(request, found)),
    ...(drift !== null && stated.length > 1 ? [sweepAlong(request, 'together', drift, true)] : []),
  ];
  const result = drift === null ? null : yieldOf(design, drift, demand, samples, seed);
  const met = cases[cases.length - 1].finding.missed.length === 0;
  return { ...request, cases, yield: result, largest, sweeps, met };
}

function sweepOf(request: ToleranceRequest, { drift: name, rms }: Largest): ToleranceSweep[] {
  const { drift } = request.design;
  const own = drift?.[name] ?? 0;
  const unit = own > 0 ? own : (rms ?? 0);
  return unit > 0 ? [sweepAlong(request, name, alone(drift, name, unit), own > 0)] : [];
}

function sweepAlong(
  { design, demand }: ToleranceRequest,
  name: ToleranceSweep['name'],
  unit: DriftSpec,
  ofStudy: boolean,
): ToleranceSweep {
  // A width that may not grow any more would look like one that does no harm.
  const possible = FACTORS.filter((factor) => factor * unit.width <= MOST.width);
  const points = possible.flatMap((factor) => {
    const { verdict } = assess(withDrift(design, scaled(unit, factor)), demand);
    if (!Number.isFinite(verdict.impurity)) return [];
    return [{ factor, brightness: verdict.brightness, impurity: verdict.impurity }];
  });
  return { name, unit, ofStudy, points };
}
