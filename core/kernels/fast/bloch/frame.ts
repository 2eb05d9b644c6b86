import type { GaussianTone } from '../../../pulse/gaussians.js';

/** Phase taken out of the drive: θ(t) = θ0 + θ1·(t − origin) + θ2·(t − origin)², rad, ps. */
export interface PhaseFrame {
  readonly origin: number;
  readonly constant: number;
  /** 1/ps. */
  readonly rate: number;
  /** 1/ps². */
  readonly chirp: number;
}

/** Frames tried between the lowest and the highest frequency. */
const TRIED = 8;

/**
 * The frame for a sum of Gaussians: with one tone its own phase, so that the drive is real; with several their mean chirp
 * and the frequency, between those of emitter and tones, that leaves the least error (`unrest`).
 * @param energy of the emitter in the frame of the tones' rates, 1/ps
 */
export function phaseFrame(tones: readonly GaussianTone[], energy: number): PhaseFrame {
  if (tones.length === 1) {
    const [{ delay, phase, rate, chirp }] = tones;
    return { origin: delay, constant: phase, rate: -rate, chirp };
  }
  let weights = 0;
  let chirp = 0;
  let origin = 0;
  for (const t of tones) {
    const weight = Math.abs(t.amplitude);
    weights += weight;
    chirp += weight * t.chirp;
    origin += weight * t.delay;
  }
  chirp /= weights;
  origin /= weights;
  // At its centre a tone turns with −rate, seen from a frame with the common chirp a little less.
  const marks = [-energy, ...tones.map((t) => -t.rate - 2 * chirp * (t.delay - origin))];
  const low = Math.min(...marks);
  const step = (Math.max(...marks) - low) / TRIED;
  for (let k = 0; k <= TRIED; k++) marks.push(low + k * step);
  let best = marks[0];
  let least = Number.POSITIVE_INFINITY;
  for (const rate of marks) {
    const left = unrest(tones, energy, { origin, constant: 0, rate, chirp });
    if (left < least) {
      least = left;
      best = rate;
    }
  }
  return { origin, constant: 0, rate: best, chirp };
}

/**
 * Measure of what a Magnus expansion of order 8 leaves in a frame, 1/ps⁸ times the pulse length: per tone strength ×
 * what turns or changes in it × at least one commutator partner × six more of any.
 */
export function unrest(tones: readonly GaussianTone[], energy: number, frame: PhaseFrame): number {
  let rabi = 0;
  for (const t of tones) rabi += Math.abs(t.amplitude);
  let sum = 0;
  for (const t of tones) {
    const width = Math.sqrt(0.5 / t.fall);
    const lag = t.delay - frame.origin;
    const rate =
      Math.abs(t.rate + frame.rate + 2 * frame.chirp * lag) + 2 * Math.abs(t.chirp - frame.chirp) * width;
    const change = rate + 1 / width;
    const z = Math.abs(energy + frame.rate + 2 * frame.chirp * lag) + 2 * Math.abs(frame.chirp) * width;
    const partner = Math.hypot(rabi, z);
    sum += Math.abs(t.amplitude) * width * change * partner * (partner + change) ** 6;
  }
  return sum;
}

/** The frame's phase at t, rad. */
export function phaseAt(frame: PhaseFrame, t: number): number {
  const s = t - frame.origin;
  return frame.constant + (frame.rate + frame.chirp * s) * s;
}

/** A tone seen in a frame: chirp and rate are what is left of them about the tone's own centre. */
export function seenFrom(frame: PhaseFrame, tone: GaussianTone): GaussianTone {
  const lag = tone.delay - frame.origin;
  const { amplitude, fall, delay } = tone;
  return {
    amplitude,
    fall,
    delay,
    phase: tone.phase - frame.constant - (frame.rate + frame.chirp * lag) * lag,
    rate: tone.rate + frame.rate + 2 * frame.chirp * lag,
    chirp: tone.chirp - frame.chirp,
  };
}
