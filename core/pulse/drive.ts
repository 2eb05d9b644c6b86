import { HBAR } from '../units/constants.js';
import type { Pulse, Tone } from './contract.js';
import { type Envelope, toneEnvelope } from './envelope.js';
import { type ToneSampler, toneSampler } from './tones.js';
import { type PlacedWindow, segments } from './window.js';

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
  const weights =
    options.projection === 'full' ? [1] : [Math.cos(tone.polarization), Math.sin(tone.polarization)];
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

/** Upper bound of |Ω|: the largest sum of the tones' magnitudes on a grid through every tone's window. */
function peakRabi(tones: readonly PlacedTone[]): number {
  const points = 128;
  let largest = 0;
  for (const { window } of tones) {
    for (let i = 0; i <= points; i++) {
      const t = window.start + ((window.end - window.start) * i) / points;
      let sum = 0;
      for (const other of tones) {
        if (t >= other.window.start && t <= other.window.end) sum += other.sampler.magnitude(t);
      }
      largest = Math.max(largest, sum);
    }
  }
  return largest;
}

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
export function createDrive(pulse: Pulse, options: DriveOptions): Drive {
  if (pulse.tones.length === 0) throw new RangeError('pulse.tones: got none; needs at least one tone');
  const tones = pulse.tones.map((tone) => placeTone(tone, options));
  const { breakpoints, active } = segments(tones.map((tone) => tone.window));
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
    scales: {
      peakRabi: peakRabi(tones),
      frequency: highestFrequency(tones, options.frame),
      time: Math.min(...tones.map((tone) => tone.envelope.timeScale)),
    },
    error: Math.max(...tones.map((tone) => tone.envelope.error)),
  };
}
