import type { CountRequest } from '../../count.js';
import type { CountGradient, Seeds, Sensitivity } from '../../gradient.js';
import type { Span } from '../spans.js';
import { backwards } from './adjoint.js';
import type { Layout } from './layout.js';
import type { DriveDerivatives } from './quadrature.js';
import type { Series } from './refine.js';
import { layoutFor, type Problem, type Run } from './run.js';
import { filterSlopes } from './slopes.js';

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

/** What one functional gains from a piece of one run. */
interface Piece {
  readonly derivatives: DriveDerivatives;
  readonly weight: number;
  readonly span: Span;
}

/**
 * Derivatives of an extrapolated value: those of its runs with the same weights; or those of the finest run alone where
 * only that was kept, which are good to the share by which it differs from the extrapolated value, mostly 1e-6.
 * @returns null for a filter and a drive with gaps, of which the derivative by the filter is not known
 */
export function differentiate(
  problem: Problem,
  { result, runs, weights }: Series<Run>,
  seeds: Seeds,
): CountGradient | null {
  const { request, layout } = problem;
  const slopes = filterSlopes(request, layout, (changed) => layoutFor(changed, problem));
  if (request.filter && (!slopes || problem.spans.length > 1)) return null;
  const both = slopes ? [slopes.kappa, slopes.center] : [];
  const wanted = seeds(result.values);
  const pieces: Piece[] = [];
  const numbers = both.map(() => new Float64Array(wanted.length));
  const whole = runs.every(({ kept }) => kept);
  runs.forEach(({ passages, final, kept }, k) => {
    if (!kept) return;
    const weight = whole ? weights[k] : 1;
    const functionals = wanted.map((seed) => weighted(layout, seed));
    wanted.forEach((seed, f) => {
      both.forEach(({ plus, minus, distance }, p) => {
        const change = dot(weighted(plus, seed), final) - dot(weighted(minus, seed), final);
        numbers[p][f] += (weight * change) / distance;
      });
    });
    const back = backwards(problem, passages, functionals, both);
    back.numbers.forEach((values, p) => {
      values.forEach((v, f) => {
        numbers[p][f] += weight * v;
      });
    });
    back.drives.forEach((derivatives, s) => {
      pieces.push({ derivatives, weight, span: problem.spans[passages[s].index] });
    });
  });
  const count = pieces.reduce((sum, { derivatives }) => sum + derivatives.times.length, 0);
  const times = new Float64Array(count);
  const segments = new Int32Array(count);
  let at = 0;
  for (const { derivatives, span } of pieces) {
    times.set(derivatives.times, at);
    putSegments(request, span, derivatives.times, segments, at);
    at += derivatives.times.length;
  }
  const sensitivities = wanted.map((_, f): Sensitivity => {
    const { drive, shift } = byDrive(problem, pieces, f, times, segments);
    const [kappa, center] = slopes ? [numbers[0][f], numbers[1][f]] : [0, 0];
    // With the levels the line moves away from a filter that stays.
    return { drive, shift: shift - center, kappa, center };
  });
  return { result, times, segments, sensitivities };
}

/** The functional that a seed makes of the final state. */
function weighted(layout: Layout, seed: Readonly<Record<string, number>>): Float64Array {
  const row = new Float64Array(layout.length);
  for (const { name, row: effect } of layout.effects) {
    const factor = seed[name] ?? 0;
    if (factor !== 0) for (let i = 0; i < row.length; i++) row[i] += factor * effect[i];
  }
  return row;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}

function putSegments(
  { drive }: CountRequest,
  span: Span,
  times: Float64Array,
  out: Int32Array,
  at: number,
): void {
  let segment = span.first;
  for (let k = 0; k < times.length; k++) {
    while (segment < span.last && times[k] >= drive.breakpoints[segment + 1]) segment++;
    out[at + k] = segment;
  }
}

function byDrive(
  { request, ladder }: Problem,
  pieces: readonly Piece[],
  functional: number,
  times: Float64Array,
  segments: Int32Array,
): { drive: Float64Array; shift: number } {
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
  return { drive, shift };
}
