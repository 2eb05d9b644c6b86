import type { Correction, Kick } from './chain.js';
import type { PhaseFrame } from './frame.js';
import { NODES } from './nodes.js';
import type { BlochProblem, BlochSpan } from './problem.js';

/** What all steps of one span have in common. */
export interface Pace {
  /** ps. */
  readonly h: number;
  /** Factor of the drive's samples: step, coupling and what the kicks' second-order error has in common for all lanes. */
  readonly scale: number;
  /** Share by which the square of the drive shrinks the drive, and the energy, for the same reason. */
  readonly quartic: number;
  readonly axial: number;
  readonly half: Kick;
  readonly full: Kick;
  readonly correction: Correction | null;
}

/**
 * Besides the drive the steps carry what the kicks' second-order error has in common for all counting operators: with
 * δ the dephasing over the decay, −(h²γ²/96)(1 + δ²) − (h⁴γ²Ω²/5760)(1 + 4δ²) of the transverse drive and
 * −(h⁴γ²Ω²/5760)(1 + δ²) of the detuning.
 */
export function paceOf(problem: BlochProblem, { span }: BlochSpan, count: number): Pace {
  const { model } = problem;
  const h = (span.end - span.start) / count;
  const ratio = model.dephasing / model.decay;
  const square = ratio * ratio;
  const small = h * model.decay * (h * model.decay);
  const half = kickOver(problem, 0.5 * h);
  const correction = correctionOf(problem, h);
  return {
    h,
    scale: model.weight * h * (1 - (small / 96) * (1 + square)),
    quartic: correction ? (small / 5760) * (1 + 4 * square) : 0,
    axial: correction ? (small / 5760) * (1 + square) : 0,
    half,
    full: { fade: half.fade * half.fade, loss: half.loss * (2 - half.loss) },
    correction,
  };
}

/** The pace of a gap: one kick. */
export function gapPace(problem: BlochProblem, { span }: BlochSpan): Pace {
  const h = span.end - span.start;
  const kick = kickOver(problem, h);
  return { h, scale: 0, quartic: 0, axial: 0, half: kick, full: kick, correction: null };
}

/** Energy times the step: of a step in the middle of time t, and its change from step to step. */
export function energyAt(energy: number, { rate, chirp, origin }: PhaseFrame, h: number, t: number): number {
  return (energy + rate + 2 * chirp * (t - origin)) * h;
}

/** The effect of some time without drive, ps. */
function kickOver({ model }: BlochProblem, time: number): Kick {
  return { fade: Math.exp(-model.coherence * time), loss: -Math.expm1(-model.decay * time) };
}

/** Corrections stand at every second kick, counted from the second of a span (correct.ts). */
export const STRIDE = 2;

/** Bounds of the corrections below which they are left out: in all, and relative to small figures. */
const NEGLIGIBLE = { whole: 5e-10, relative: 1e-7 };

function correctionOf(problem: BlochProblem, h: number): Correction | null {
  const { decay, dephasing, weight } = problem.model;
  const rabi = h * problem.drive.scales.peakRabi * Math.abs(weight);
  const relative = (h * decay * rabi * rabi * rabi) / 1920 + (h * dephasing * rabi) / 48;
  if (correctionBound(problem, h) < NEGLIGIBLE.whole && relative < NEGLIGIBLE.relative) return null;
  const small = h * decay * (h * decay);
  const ratio = dephasing / decay;
  return { quadratic: (-STRIDE * small * ratio) / 48, quartic: (STRIDE * small) / 1920, ratio };
}

/** Bound of all corrections together, for steps of h (ps); actual effects are ten times smaller. */
export function correctionBound({ drive, model }: BlochProblem, h: number): number {
  const { decay, dephasing, weight } = model;
  const { peakRabi, time } = drive.scales;
  const rabi = h * peakRabi * Math.abs(weight);
  const perArea = (h * decay * rabi * (h * decay * rabi)) / 1920 + (h * h * decay * dephasing) / 48;
  return perArea * AREA * peakRabi * time;
}

/** Area of a Gaussian over its peak and width: √2π. */
const AREA = 2.5;

/** Takes the share quartic·|drive|² from every node: part of the kicks' second-order error. */
export function shrink(samples: Float64Array, quartic: number, width: 1 | 2, steps: number): void {
  for (let i = 0; i < width * NODES * steps; i += width) {
    const a = samples[i];
    const b = width === 2 ? samples[i + 1] : 0;
    const factor = 1 - quartic * (a * a + b * b);
    samples[i] = a * factor;
    if (width === 2) samples[i + 1] = b * factor;
  }
}
