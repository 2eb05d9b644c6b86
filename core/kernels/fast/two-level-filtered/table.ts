import type { Drive } from '../../../pulse/drive.js';
import { type Energies, spatialVectors } from '../bloch/magnus.js';
import { NODES, BLOCK as NODES_BLOCK } from '../bloch/nodes.js';
import { energyAt } from '../bloch/pace.js';
import type { BlochSpan } from '../bloch/problem.js';
import { addComplex, sampleDrive } from '../bloch/table.js';
import type { TwoLevel } from '../two-level.js';
import { ROW } from './propagate.js';

/** Steps that a table holds. */
export const BLOCK = NODES_BLOCK;

/** Uniform steps over the whole drive window. */
export interface Steps {
  readonly drive: Drive;
  readonly model: TwoLevel;
  /** The whole window as one span, with the frame in which rotations are made (gaps included). */
  readonly part: BlochSpan;
  /** Centre of the filter in the drive's frame, 1/ps. */
  readonly center: number;
  readonly count: number;
  /** ps. */
  readonly h: number;
  /** Factor of the drive in rotations. */
  readonly scale: number;
}

/** What the last table was made from: drive at the nodes (times step and scale), turns of steps' own frames, rotation vectors. */
export const samples = new Float64Array(2 * NODES * BLOCK);
export const turns = new Float64Array(BLOCK);
export const vectors = new Float64Array(3 * BLOCK);
const edges = new Float64Array(2 * BLOCK);

/** Fills a table with steps from … to − 1 (at most BLOCK), in the frame of the filter, in which open legs stand still. */
export function fillTable(steps: Steps, from: number, to: number, table: Float64Array): void {
  const { drive, model, part, h } = steps;
  const { span, frame, source } = part;
  const count = to - from;
  const scale = model.weight * h * steps.scale;
  const grid = { start: span.start + from * h, h };
  const own = follows(part) ? turns : null;
  if (source.kind === 'sampled') sampleDrive(drive, frame, scale, grid, 0, count, span, own, samples);
  else {
    samples.fill(0, 0, 2 * NODES * count);
    for (const tone of source.tones) addComplex(tone, scale, grid, 0, count, samples);
  }
  spatialVectors(samples, energiesFrom(steps, from), own, 0, count, vectors, edges);
  writeRows(steps, grid.start, count, own, table);
}

/** Whether steps have frames of their own. */
export const follows = ({ source }: BlochSpan): boolean => source.kind === 'sampled' && source.follow;

/** Energies of the steps from number `from` on. */
export function energiesFrom({ model, part, h }: Steps, from: number): Energies {
  const { frame, span } = part;
  return {
    first: energyAt(model.energy, frame, h, span.start + (from + 0.5) * h),
    slope: 2 * frame.chirp * h * h,
    axial: 0,
  };
}

/** What the frame of rotations has gained on that of the filter at time t, rad, without its constant part. */
export function gain({ part, center }: Steps, t: number): number {
  const { frame, span } = part;
  const s = t - frame.origin;
  return (frame.rate + frame.chirp * s) * s + center * (t - span.start);
}

/**
 * Rows from rotation vectors. Both ends of a step turn by what the frame has gained there on that of the filter, ψ(t); its
 * constant part changes no figure and is left out.
 */
function writeRows(
  steps: Steps,
  start: number,
  count: number,
  own: Float64Array | null,
  table: Float64Array,
): void {
  const { h, scale } = steps;
  const { frame } = steps.part;
  // e^{iψ/2} at the grid points and its ratio from one to the next, both by recurrence.
  const first = 0.5 * gain(steps, start);
  const step = 0.5 * (gain(steps, start + h) - gain(steps, start));
  const bend = frame.chirp * h * h;
  let er = Math.cos(first);
  let ei = Math.sin(first);
  let dr = Math.cos(step);
  let di = Math.sin(step);
  const br = Math.cos(bend);
  const bi = Math.sin(bend);
  const back = 1 / (scale * h);
  for (let n = 0, k = 0, v = 0; n < count; n++, k += ROW, v += 3) {
    const px = vectors[v];
    const py = vectors[v + 1];
    const pz = vectors[v + 2];
    const u = 0.25 * (px * px + py * py + pz * pz);
    let c: number;
    let s: number;
    if (u <= 1) {
      // Chebyshev interpolants on [0, 1] of cos √u and sin √u/(2√u), exact to 2e-16.
      const u2 = u * u;
      const u4 = u2 * u2;
      c =
        1 -
        0.49999999999999983 * u +
        (0.0416666666666628 - 0.0013888888888579183 * u) * u2 +
        (2.4801587179865645e-5 -
          2.7557293238470703e-7 * u +
          (2.087368217362566e-9 - 1.128104316059591e-11 * u) * u2) *
          u4;
      s =
        0.5 -
        0.08333333333332882 * u +
        (0.0041666666665944 - 9.920634877258376e-5 * u) * u2 +
        (1.3778647210317656e-6 - 1.2524233053905736e-8 * u + 7.89673695596647e-11 * u2) * u4;
    } else {
      const half = Math.sqrt(u);
      c = Math.cos(half);
      s = (0.5 * Math.sin(half)) / half;
    }
    let wr = c;
    let wi = s * pz;
    if (own && own[n] !== 0) {
      const l = Math.cos(0.5 * own[n]);
      const m = -Math.sin(0.5 * own[n]);
      const w = wr * l - wi * m;
      wi = wi * l + wr * m;
      wr = w;
    }
    // e^{iψ/2} after the step.
    const fr = er * dr - ei * di;
    const fi = er * di + ei * dr;
    // (w, z) turns by −(ψ₁ − ψ₀)/2, (x, y) by −(ψ₁ + ψ₀)/2.
    const w = wr * dr + wi * di;
    const z = wi * dr - wr * di;
    const gr = fr * er - fi * ei;
    const gi = fr * ei + fi * er;
    const xr = s * px;
    const xi = s * py;
    const x = xr * gr + xi * gi;
    const y = xi * gr - xr * gi;
    const xx = x * x;
    const yy = y * y;
    const zz = z * z;
    table[k] = 1 - 2 * (yy + zz);
    table[k + 1] = 2 * (x * y - w * z);
    table[k + 2] = 2 * (x * z + w * y);
    table[k + 3] = 2 * (x * y + w * z);
    table[k + 4] = 1 - 2 * (xx + zz);
    table[k + 5] = 2 * (y * z - w * x);
    table[k + 6] = 2 * (x * z - w * y);
    table[k + 7] = 2 * (y * z + w * x);
    table[k + 8] = 2 * (xx + yy);
    const cr = fr * fr - fi * fi;
    const ci = 2 * fr * fi;
    const a = back * edges[2 * n];
    const b = back * edges[2 * n + 1];
    table[k + 9] = a * cr - b * ci;
    table[k + 10] = a * ci + b * cr;
    er = fr;
    ei = fi;
    const next = dr * br - di * bi;
    di = dr * bi + di * br;
    dr = next;
  }
}
