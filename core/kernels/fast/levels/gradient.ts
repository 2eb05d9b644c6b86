import type { CountRequest } from '../../count.js';
import type { CountGradient, Seeds, Sensitivity } from '../../gradient.js';
import type { Span } from '../spans.js';
import { backwards } from './adjoint.js';
import type { DriveDerivatives } from './quadrature.js';
import type { Series } from './refine.js';
import type { Problem, Run } from './run.js';

/** Whether the derivative by the component that the pulse does not use vanishes by symmetry. */
export function darkStaysDark({ request, ladder }: Problem): boolean {
  if (!ladder) return false;
  const inside = (i: number): boolean => ladder.levels.includes(i);
  return request.dipoles.every(({ n, re, im }) => {
    const kinds = new Set<boolean>();
    for (let k = 0; k < n * n; k++) {
      if (re[k] !== 0 || im[k] !== 0) kinds.add(inside(Math.floor(k / n)) === inside(k % n));
    }
    return kinds.size < 2;
  });
}

/** Derivatives of an extrapolated value: those of its runs with the same weights. */
export function differentiate(
  problem: Problem,
  { result, runs, weights }: Series<Run>,
  seeds: Seeds,
): CountGradient | null {
  const { request, layout } = problem;
  const wanted = seeds(result.values);
  const pieces: { derivatives: DriveDerivatives; weight: number; span: Span }[] = [];
  runs.forEach(({ passages }, k) => {
    const functionals = wanted.map((seed) => {
      const row = new Float64Array(layout.length);
      for (const { name, row: effect } of layout.effects) {
        const factor = seed[name] ?? 0;
        if (factor !== 0) for (let i = 0; i < row.length; i++) row[i] += factor * effect[i];
      }
      return row;
    });
    backwards(problem, passages, functionals).forEach((derivatives, s) => {
      pieces.push({ derivatives, weight: weights[k], span: problem.spans[passages[s].index] });
    });
  });
  const times = Float64Array.from(pieces.flatMap(({ derivatives }) => Array.from(derivatives.times)));
  const segments = Int32Array.from(
    pieces.flatMap(({ derivatives, span }) => segmentsOf(request, span, derivatives.times)),
  );
  const sensitivities = wanted.map((_, f) => sensitivity(problem, pieces, f, times, segments));
  return { result, times, segments, sensitivities };
}

function segmentsOf({ drive }: CountRequest, span: Span, times: Float64Array): number[] {
  let segment = span.first;
  return Array.from(times, (t) => {
    while (segment < span.last && t >= drive.breakpoints[segment + 1]) segment++;
    return segment;
  });
}

function sensitivity(
  { request, ladder }: Problem,
  pieces: readonly { derivatives: DriveDerivatives; weight: number }[],
  functional: number,
  times: Float64Array,
  segments: Int32Array,
): Sensitivity {
  const width = 2 * request.drive.components;
  const at = 2 * (ladder?.component ?? 0);
  const drive = new Float64Array(width * times.length);
  const value = new Float64Array(width);
  const middle = 0.5 * (times[0] + times[times.length - 1]);
  let shift = 0;
  let i = 0;
  for (const { derivatives, weight } of pieces) {
    const scalars = derivatives.scalars[functional];
    for (let k = 0; k < derivatives.times.length; k++, i++) {
      const re = weight * scalars[2 * k];
      const im = weight * scalars[2 * k + 1];
      drive[width * i + at] = re;
      drive[width * i + at + 1] = im;
      // Levels that lie higher by δ under the same drive are the same levels under Ω·e^{iδt}.
      request.drive.sample(times[i], segments[i], value);
      const t = times[i] - middle;
      shift += t * (im * value[at] - re * value[at + 1]);
    }
  }
  return { drive, shift, kappa: 0, center: 0 };
}
