import { HBAR } from '../units/constants.js';
import type { Pulse, Tone } from './contract.js';
import type { SampleDerivatives } from './derivatives/contract.js';
import { toneDerivatives } from './derivatives/drive.js';
import { type Envelope, toneEnvelope } from './envelope.js';
import { type GaussianTone, gaussianTones } from './gaussians.js';
import { polarizationWeights } from './polarization.js';
import { type ToneSampler, toneSampler } from './tones.js';
import { type PlacedWindow, type Segments, segments } from './window.js';

/** Interval of a segment with an upper bound of |Ω| (1/ps) inside. */
export interface BoundedCell {
  readonly from: number;
  readonly to: number;
  readonly segment: number;
  readonly bound: number;
}

/** The complex envelope of a pulse in a rotating frame, on a finite window. */
export interface Drive {
  /** 1: a two-level emitter takes every polarisation in full (Ω = sum of all tones); 2: (h, v). */
  readonly components: 1 | 2;
  /** Angular frequency of the frame, 1/ps relative to the pulse reference: Ω'(t) = Ω(t) e^{+i frame t}. */
  readonly frame: number;
  /** Ascending times, ps: window start, every discontinuity and every on/off of a tone inside, window end. */
  readonly breakpoints: Float64Array;
  /**
   * Writes re, im of each component (2·components numbers, 1/ps) at time t (ps). `segment` is the index of the
   * interval between breakpoints that is meant: it decides which one-sided value holds at a breakpoint.
   */
  sample(t: number, segment: number, out: Float64Array): void;
  /** Ascending pieces of the window, each with an upper bound of |Ω|. */
  readonly cells: readonly BoundedCell[];
  /**
   * For step rules: upper bound of |Ω| (1/ps), largest |instantaneous frequency| in this frame that matters (1/ps),
   * shortest time scale (ps).
   */
  readonly scales: { readonly peakRabi: number; readonly frequency: number; readonly time: number };
  /**
   * Estimated error of the envelope relative to its peak; 0 for closed forms. For a dispersed square the far wings
   * that no grid can hold count with the excited-state admixture that they would have caused.
   */
  readonly error: number;
  /** The same drive as a sum of Gaussians where it is one, for tables by recurrence. */
  readonly gaussians?: readonly GaussianTone[] | null;
  /** Weight of each tone in each component. */
  readonly directions?: readonly (readonly number[])[];
}

/** A drive that knows the tones it is made of. */
export interface PulseDrive extends Drive {
  /**
   * Adds the derivatives of scalars by all parameters of the tones to one vector per scalar (derivatives/layout.ts).
   * @returns false, and adds nothing, where there are none at fixed sample times
   */
  differentiate(samples: SampleDerivatives, into: readonly Float64Array[]): boolean;
}

export interface DriveOptions {
  /** 1/ps relative to the pulse reference. */
  readonly frame: number;
  readonly projection: 'full' | 'linear';
}

interface PlacedTone {
  readonly tone: Tone;
  readonly envelope: Envelope;
  readonly sampler: ToneSampler;
  readonly window: PlacedWindow;
}

function placeTone(tone: Tone, options: DriveOptions): PlacedTone {
  const envelope = toneEnvelope(tone);
  const weights = options.projection === 'full' ? [1] : polarizationWeights(tone.polarization);
  const place = {
    area: tone.area,
    phase: tone.phase,
    rate: tone.detuning / HBAR - options.frame,
    delay: tone.delay,
    weights,
  };
  const sampler = toneSampler(envelope, place);
  const window = {
    start: tone.delay + envelope.start,
    end: tone.delay + envelope.end,
    edges: envelope.edges.map((edge) => tone.delay + edge),
  };
  return { tone, envelope, sampler, window };
}

/** Pieces per tone in which bounds of |Ω| are taken. */
const CELLS = 64;

/** Cuts every segment so finely that the tones in it hardly change their bound from one cell to the next. */
function boundedCells(tones: readonly PlacedTone[], { breakpoints, active }: Segments): BoundedCell[] {
  const cells: BoundedCell[] = [];
  for (let segment = 0; segment + 1 < breakpoints.length; segment++) {
    const acting = tones.filter((_, k) => active[segment * tones.length + k] !== 0);
    const start = breakpoints[segment];
    const length = breakpoints[segment + 1] - start;
    const shortest = Math.min(...acting.map(({ window }) => window.end - window.start));
    const count = acting.length === 0 ? 1 : Math.min(2048, Math.ceil((CELLS * length) / shortest));
    for (let i = 0; i < count; i++) {
      const from = start + (length * i) / count;
      const to = i + 1 === count ? breakpoints[segment + 1] : start + (length * (i + 1)) / count;
      let bound = 0;
      for (const { sampler } of acting) bound += sampler.bound(from, to);
      cells.push({ from, to, segment, bound });
    }
  }
  return cells;
}

const peakOf = (cells: readonly BoundedCell[]) =>
  cells.reduce((largest, cell) => Math.max(largest, cell.bound), 0);

function highestFrequency(tones: readonly PlacedTone[], frame: number): number {
  let highest = 0;
  for (const { tone, envelope } of tones) {
    const rate = tone.detuning / HBAR - frame;
    const [low, high] = envelope.frequencies;
    highest = Math.max(highest, Math.abs(rate + low), Math.abs(rate + high));
  }
  return highest;
}

/**
 * The drive of a pulse in the frame asked for. The window follows by rule from the tones (see `cutLevel`); tones that
 * do not overlap leave gaps in it, in which the drive is exactly zero.
 * @throws DispersionError when a dispersed tone is spread over more samples than a transform can hold
 */
export function createDrive(pulse: Pulse, options: DriveOptions): PulseDrive {
  if (pulse.tones.length === 0) throw new RangeError('pulse.tones: got none; needs at least one tone');
  const tones = pulse.tones.map((tone) => placeTone(tone, options));
  const cut = segments(tones.map((tone) => tone.window));
  const { breakpoints, active } = cut;
  let cells: readonly BoundedCell[] | null = null;
  const allCells = () => {
    cells ??= boundedCells(tones, cut);
    return cells;
  };
  const samplers = tones.map((tone) => tone.sampler);
  const count = samplers.length;
  const components = options.projection === 'full' ? 1 : 2;
  return {
    components,
    frame: options.frame,
    breakpoints,
    sample(t, segment, out) {
      for (let i = 0; i < 2 * components; i++) out[i] = 0;
      const row = segment * count;
      for (let k = 0; k < count; k++) {
        if (active[row + k] !== 0) samplers[k].add(t, out);
      }
    },
    differentiate: (samples, into) =>
      toneDerivatives(tones, active, { frame: options.frame, components }, samples, into),
    get cells() {
      return allCells();
    },
    scales: {
      peakRabi: count === 1 ? Math.abs(tones[0].tone.area) * tones[0].envelope.peak : peakOf(allCells()),
      frequency: highestFrequency(tones, options.frame),
      time: Math.min(...tones.map((tone) => tone.envelope.timeScale)),
    },
    error: Math.max(...tones.map((tone) => tone.envelope.error)),
    gaussians: gaussianTones(pulse.tones, options.frame),
    directions: pulse.tones.map((tone) => (components === 1 ? [1] : polarizationWeights(tone.polarization))),
  };
}
