import type { Legs } from './legs.js';
import type { StepNumbers } from './step.js';

/**
 * Numbers per step in a table: row-major rotation (9, the last one as its difference from 1, which keeps small excitations
 * exact) and the drive at the end of the step (re, im; 1/ps).
 */
export const ROW = 11;

/** Arrays of one propagation, laid out like the blocks (legs.ts). */
export interface Work {
  /** The blocks: s, r, b, t as (re, im). */
  readonly y: Float64Array;
  /** What events see of each block: 2X_xg, 2X_gx, 2X_xx as (re, im). */
  readonly seen: Float64Array;
  /** The same summed over the sources of a block: on the left X_xg and X_xx, on the right X_gx and X_xx. */
  readonly fed: Float64Array;
  /** Change of 2X_gx by the events on the left. */
  readonly change: Float64Array;
  /** Factors per open leg count: of trace, coherence, excited state. */
  readonly damping: Float64Array;
}

export function workFor(legs: Legs): Work {
  const y = new Float64Array(legs.size);
  const start = legs.at(0, 0, 0);
  y[start + 6] = 1;
  return {
    y,
    seen: new Float64Array(legs.size),
    fed: new Float64Array(legs.size),
    change: new Float64Array(legs.size),
    damping: new Float64Array(3 * (legs.order + 1)),
  };
}

/** Sets the factors of a step. */
export function setDamping(work: Work, { damp, fade, keep }: StepNumbers): void {
  const { damping } = work;
  for (let m = 0, d = 1; 3 * m < damping.length; m++, d *= damp) {
    damping[3 * m] = d;
    damping[3 * m + 1] = d * fade;
    damping[3 * m + 2] = d * keep;
  }
}

/** Advances the blocks over steps from … to − 1 of a table. */
export function propagate(
  legs: Legs,
  work: Work,
  numbers: StepNumbers,
  table: Float64Array,
  from: number,
  to: number,
): void {
  const { twice, decaying, pair, pairDriven, dephasing, opened, closed } = numbers;
  for (let n = from, k = ROW * from; n < to; n++, k += ROW) {
    const re = table[k + 9];
    const im = table[k + 10];
    const square = pairDriven * (re * re + im * im);
    rotateComplex(legs, work, table, k, pair, square, dephasing * im, dephasing * re);
    rotateHermitian(legs, work, table, k, pair, square, dephasing * im, dephasing * re);
    gatherComplex(legs, work, opened, closed);
    gatherHermitian(legs, work, opened, closed);
    eventsOnLeft(legs, work, numbers, -twice * im, twice * re, -decaying * im, decaying * re);
    gatherChange(legs, work, opened, closed);
    eventsOnRight(legs, work, numbers, -twice * im, twice * re, -decaying * im, decaying * re);
    eventsOnBoth(legs, work, numbers, -twice * im, twice * re, -decaying * im, decaying * re);
  }
}

/** Rotation, decay and damping over a step, what events then see, and coincident pairs. */
function rotateComplex(
  legs: Legs,
  { y, seen, damping }: Work,
  table: Float64Array,
  k: number,
  pair: number,
  driven: number,
  fx: number,
  fy: number,
): void {
  const { count, offset, legs: open, before } = legs.complex;
  const m0 = table[k];
  const m1 = table[k + 1];
  const m2 = table[k + 2];
  const m3 = table[k + 3];
  const m4 = table[k + 4];
  const m5 = table[k + 5];
  const m6 = table[k + 6];
  const m7 = table[k + 7];
  const k8 = table[k + 8];
  const m8 = 1 - k8;
  for (let i = 0; i < count; i++) {
    const o = offset[i];
    const d = 3 * open[i];
    const e = damping[d];
    const f = damping[d + 1];
    const g = damping[d + 2];
    const sr = y[o];
    const si = y[o + 1];
    const rr = y[o + 2];
    const ri = y[o + 3];
    const xr = y[o + 4];
    const xi = y[o + 5];
    const tr = y[o + 6];
    const ti = y[o + 7];
    const zr = tr - xr;
    const zi = ti - xi;
    const br = g * (k8 * tr + m8 * xr - (m6 * sr + m7 * rr));
    const bi = g * (k8 * ti + m8 * xi - (m6 * si + m7 * ri));
    const ter = e * tr;
    const tei = e * ti;
    const ssr = f * (m0 * sr + m1 * rr + m2 * zr) + fx * ter;
    const ssi = f * (m0 * si + m1 * ri + m2 * zi) + fx * tei;
    const rrr = f * (m3 * sr + m4 * rr + m5 * zr) + fy * ter;
    const rri = f * (m3 * si + m4 * ri + m5 * zi) + fy * tei;
    seen[o] = ssr + rri;
    seen[o + 1] = ssi - rrr;
    seen[o + 2] = ssr - rri;
    seen[o + 3] = ssi + rrr;
    seen[o + 4] = br;
    seen[o + 5] = bi;
    const p = before[i];
    const pr = pair * seen[p + 4];
    const pi = pair * seen[p + 5];
    y[o] = ssr - driven * y[p];
    y[o + 1] = ssi - driven * y[p + 1];
    y[o + 2] = rrr - driven * y[p + 2];
    y[o + 3] = rri - driven * y[p + 3];
    y[o + 4] = br + driven * y[p + 4];
    y[o + 5] = bi + driven * y[p + 5];
    y[o + 6] = ter + pr + driven * y[p + 6];
    y[o + 7] = tei + pi + driven * y[p + 7];
  }
}

/** The same for Hermitian blocks. */
function rotateHermitian(
  legs: Legs,
  { y, seen, damping }: Work,
  table: Float64Array,
  k: number,
  pair: number,
  driven: number,
  fx: number,
  fy: number,
): void {
  const { count, offset, legs: open, before } = legs.hermitian;
  const m0 = table[k];
  const m1 = table[k + 1];
  const m2 = table[k + 2];
  const m3 = table[k + 3];
  const m4 = table[k + 4];
  const m5 = table[k + 5];
  const m6 = table[k + 6];
  const m7 = table[k + 7];
  const k8 = table[k + 8];
  const m8 = 1 - k8;
  for (let i = 0; i < count; i++) {
    const o = offset[i];
    const d = 3 * open[i];
    const e = damping[d];
    const f = damping[d + 1];
    const s = y[o];
    const r = y[o + 2];
    const x = y[o + 4];
    const t = y[o + 6];
    const z = t - x;
    const b = damping[d + 2] * (k8 * t + m8 * x - (m6 * s + m7 * r));
    const te = e * t;
    const ss = f * (m0 * s + m1 * r + m2 * z) + fx * te;
    const rr = f * (m3 * s + m4 * r + m5 * z) + fy * te;
    seen[o] = ss;
    seen[o + 1] = -rr;
    seen[o + 2] = ss;
    seen[o + 3] = rr;
    seen[o + 4] = b;
    const p = before[i];
    const add = pair * seen[p + 4];
    y[o] = ss - driven * y[p];
    y[o + 2] = rr - driven * y[p + 2];
    y[o + 4] = b + driven * y[p + 4];
    y[o + 6] = te + add + driven * y[p + 6];
  }
}

/** Sums over the sources of every block. */
function gatherComplex(legs: Legs, { seen, fed }: Work, opened: number, closed: number): void {
  const { count, offset, leftOpen, leftClose, leftWeight, rightOpen, rightClose, rightWeight } = legs.complex;
  for (let i = 0; i < count; i++) {
    const o = offset[i];
    const a = leftOpen[i];
    const b = leftClose[i];
    const u = leftWeight[i];
    fed[o] = opened * seen[a] + closed * u * seen[b];
    fed[o + 1] = opened * seen[a + 1] + closed * u * seen[b + 1];
    fed[o + 2] = seen[a + 4] + u * seen[b + 4];
    fed[o + 3] = seen[a + 5] + u * seen[b + 5];
    const c = rightOpen[i];
    const d = rightClose[i];
    const v = rightWeight[i];
    fed[o + 4] = opened * seen[c + 2] + closed * v * seen[d + 2];
    fed[o + 5] = opened * seen[c + 3] + closed * v * seen[d + 3];
    fed[o + 6] = seen[c + 4] + v * seen[d + 4];
    fed[o + 7] = seen[c + 5] + v * seen[d + 5];
  }
}

/** A Hermitian block is fed on the left by the adjoint of what feeds it on the right. */
function gatherHermitian(legs: Legs, { seen, fed }: Work, opened: number, closed: number): void {
  const { count, offset, rightOpen, rightClose, rightWeight } = legs.hermitian;
  for (let i = 0; i < count; i++) {
    const o = offset[i];
    const c = rightOpen[i];
    const d = rightClose[i];
    const v = rightWeight[i];
    const xr = opened * seen[c + 2] + closed * v * seen[d + 2];
    const xi = opened * seen[c + 3] + closed * v * seen[d + 3];
    const br = seen[c + 4] + v * seen[d + 4];
    const bi = seen[c + 5] + v * seen[d + 5];
    fed[o] = xr;
    fed[o + 1] = -xi;
    fed[o + 2] = br;
    fed[o + 3] = -bi;
    fed[o + 4] = xr;
    fed[o + 5] = xi;
    fed[o + 6] = br;
    fed[o + 7] = bi;
  }
}

function eventsOnLeft(
  legs: Legs,
  { y, fed, change }: Work,
  { intoTrace, intoCoherence, both, turn }: StepNumbers,
  wr: number,
  wi: number,
  xr: number,
  xi: number,
): void {
  const { count, offset, leftOpen, leftClose, leftWeight } = legs.complex;
  const seenChange = 2 * both;
  for (let i = 0; i < count; i++) {
    const o = offset[i];
    const a = leftOpen[i];
    const b = leftClose[i];
    const u = leftWeight[i];
    const pr = fed[a] + u * fed[b];
    const pi = fed[a + 1] + u * fed[b + 1];
    const qr = fed[a + 2] + u * fed[b + 2];
    const qi = fed[a + 3] + u * fed[b + 3];
    const br = fed[o + 2];
    const bi = fed[o + 3];
    const tr = intoTrace * (fed[o] + (wr * pr - wi * pi) + (xr * br - xi * bi));
    const ti = intoTrace * (fed[o + 1] + (wr * pi + wi * pr) + (xr * bi + xi * br));
    const dr = intoCoherence * (br + (wr * qr - wi * qi));
    const di = intoCoherence * (bi + (wr * qi + wi * qr));
    change[o] = seenChange * dr;
    change[o + 1] = seenChange * di;
    // X_gx = (s + ir)/2.
    y[o] += dr;
    y[o + 1] += di;
    y[o + 2] += di;
    y[o + 3] -= dr;
    const ur = tr - turn * ti;
    const ui = ti + turn * tr;
    y[o + 6] += ur;
    y[o + 7] += ui;
  }
}

/** Events on the right come after those on the left: what these have changed counts. */
function gatherChange(legs: Legs, { fed, change }: Work, opened: number, closed: number): void {
  const { count, offset, rightOpen, rightClose, rightWeight } = legs.complex;
  for (let i = 0; i < count; i++) {
    const o = offset[i];
    const c = rightOpen[i];
    const d = rightClose[i];
    const v = rightWeight[i];
    const gr = opened * change[c] + closed * v * change[d];
    const gi = opened * change[c + 1] + closed * v * change[d + 1];
    change[o + 2] = gr;
    change[o + 3] = gi;
    fed[o + 4] += gr;
    fed[o + 5] += gi;
  }
}

function eventsOnRight(
  legs: Legs,
  { y, fed }: Work,
  { intoTrace, intoCoherence, turn }: StepNumbers,
  wr: number,
  wi: number,
  xr: number,
  xi: number,
): void {
  const { count, offset, rightOpen, rightClose, rightWeight } = legs.complex;
  for (let i = 0; i < count; i++) {
    const o = offset[i];
    const c = rightOpen[i];
    const d = rightClose[i];
    const v = rightWeight[i];
    const pr = fed[c + 4] + v * fed[d + 4];
    const pi = fed[c + 5] + v * fed[d + 5];
    const qr = fed[c + 6] + v * fed[d + 6];
    const qi = fed[c + 7] + v * fed[d + 7];
    const br = fed[o + 6];
    const bi = fed[o + 7];
    const tr = intoTrace * (fed[o + 4] + (wr * pr + wi * pi) + (xr * br + xi * bi));
    const ti = intoTrace * (fed[o + 5] + (wr * pi - wi * pr) + (xr * bi - xi * br));
    const dr = intoCoherence * (br + (wr * qr + wi * qi));
    const di = intoCoherence * (bi + (wr * qi - wi * qr));
    // X_xg = (s − ir)/2.
    y[o] += dr;
    y[o + 1] += di;
    y[o + 2] -= di;
    y[o + 3] += dr;
    const ur = tr + turn * ti;
    const ui = ti - turn * tr;
    y[o + 6] += ur;
    y[o + 7] += ui;
  }
}

/** Both sides at once of Hermitian blocks. */
function eventsOnBoth(
  legs: Legs,
  { y, fed, change }: Work,
  { intoTrace, intoCoherence, turn, opened, closed }: StepNumbers,
  wr: number,
  wi: number,
  xr: number,
  xi: number,
): void {
  const { count, offset, rightOpen, rightClose, rightWeight } = legs.hermitian;
  for (let i = 0; i < count; i++) {
    const o = offset[i];
    const c = rightOpen[i];
    const d = rightClose[i];
    const v = rightWeight[i];
    // Left before right: half of either see what the other has changed.
    const pr = 2 * (fed[c + 4] + v * fed[d + 4]) - (change[c + 2] + v * change[d + 2]);
    const pi = 2 * (fed[c + 5] + v * fed[d + 5]) - (change[c + 3] + v * change[d + 3]);
    const qr = fed[c + 6] + v * fed[d + 6];
    const qi = fed[c + 7] + v * fed[d + 7];
    const br = fed[o + 6];
    const bi = fed[o + 7];
    const sr = 2 * (fed[o + 4] + (xr * br + xi * bi)) + wr * pr + wi * pi;
    const si = 2 * (fed[o + 5] + (xr * bi - xi * br)) + wr * pi - wi * pr;
    const t = intoTrace * (sr + turn * si + (opened * change[c] + closed * v * change[d]));
    const dr = 2 * intoCoherence * (br + wr * qr + wi * qi);
    const di = 2 * intoCoherence * (bi + wr * qi - wi * qr);
    y[o] += dr;
    y[o + 2] -= di;
    y[o + 6] += t;
  }
}
