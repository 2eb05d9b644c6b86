/*
 * Figures of a run as one vector, so that runs can be compared without making objects. NaN: not asked for.
 */
export const P0 = 0;
export const P1 = 1;
export const P2 = 2;
export const P3 = 3;
export const MULTIPHOTON = 4;
export const MEAN = 5;
export const FACTORIAL = 6;
/** Thinned count: none, one, more. */
export const THINNED = 7;
/** Populations at the end of the window. */
export const GROUND = 10;
export const EXCITED = 11;
export const FIGURES = 12;

/** Figures by target name. Written out: keys from a list would cost as much as some steps. */
export function named(figures: Float64Array): Record<string, number> {
  const values: Record<string, number> = { mean: figures[MEAN], factorial2: figures[FACTORIAL] };
  if (!Number.isNaN(figures[P0])) {
    values['p0'] = figures[P0];
    values['p1'] = figures[P1];
    values['multiphoton'] = figures[MULTIPHOTON];
  }
  if (!Number.isNaN(figures[P2])) {
    values['p2'] = figures[P2];
    values['p3'] = figures[P3];
  }
  if (!Number.isNaN(figures[THINNED])) {
    values['thinned0'] = figures[THINNED];
    values['thinned1'] = figures[THINNED + 1];
    values['thinnedMultiphoton'] = figures[THINNED + 2];
  }
  return values;
}

/** Smallest value at which a relative accuracy is promised. */
const FLOOR = 1e-7;
/** Absolute accuracy of probabilities of no and one photon over the relative accuracy of all else. */
const RELATIVE = 1e-3;
/** No accuracy is promised for p_3; a hundredth of that of p_2 is kept. */
const LOOSE = 100;

/** Absolute rounding error of the mean: populations are differences of numbers of order one. */
const ROUNDING = 1e-15;

/** What rounding leaves of g⁽²⁾[0] where next to nothing is emitted, in the measure of `distance`. */
export function rounding(figures: Float64Array): number {
  const mean = Math.abs(figures[MEAN]);
  return mean > 0 ? (ROUNDING / mean) * RELATIVE : 0;
}

/** Populations at the end of the window are kept to ten times the absolute accuracy. */
const POPULATION = 0.1;

/** Largest difference of two runs, in the measure of `disagreement` (../estimate.ts). */
export function distance(a: Float64Array, b: Float64Array): number {
  let worst = POPULATION * Math.abs(a[EXCITED] - b[EXCITED]);
  for (let i = 0; i < GROUND; i++) {
    const difference = Math.abs(a[i] - b[i]);
    if (Number.isNaN(difference) && Number.isNaN(a[i]) && Number.isNaN(b[i])) continue;
    const absolute = i === P0 || i === P1 || i === THINNED || i === THINNED + 1;
    const size = Math.max(Math.abs(b[i]), FLOOR) * (i === P3 ? LOOSE : 1);
    const error = absolute ? difference : (difference / size) * RELATIVE;
    if (!(error <= worst)) worst = error;
  }
  if (a[MEAN] > 0 && b[MEAN] > 0) {
    const x = a[FACTORIAL] / (a[MEAN] * a[MEAN]);
    const y = b[FACTORIAL] / (b[MEAN] * b[MEAN]);
    const error = (Math.abs(x - y) / Math.max(y, FLOOR)) * RELATIVE;
    if (!(error <= worst)) worst = error;
  }
  return worst;
}
