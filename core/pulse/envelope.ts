import type { Tone } from './contract.js';
import { type DispersedEnvelope, disperse, excursion } from './dispersed.js';
import type { ClosedEnvelope, PulseShape } from './shapes/contract.js';
import { pulseShape } from './shapes/registry.js';

/**
 * Dispersed envelope of one tone, area 1, in the tone's own frame and about its own centre.
 * Outside [start, end] it is taken as zero.
 */
export interface Envelope {
  /** ps, relative to the tone's delay. */
  readonly start: number;
  readonly end: number;
  /** Discontinuities, ps, ascending. */
  readonly edges: readonly number[];
  /** Largest |env|, 1/ps. */
  readonly peak: number;
  /** Shortest characteristic time, ps. */
  readonly timeScale: number;
  /** Range of instantaneous frequencies that carry more than 1e-4 of the peak field, 1/ps about the tone's centre. */
  readonly frequencies: readonly [number, number];
  /** Estimated error relative to the peak. */
  readonly error: number;
  readonly form:
    | { readonly kind: 'closed'; readonly closed: ClosedEnvelope }
    | { readonly kind: 'table'; readonly dispersed: DispersedEnvelope };
}

/** Relative field at which the instantaneous frequency stops to matter for step rules. */
const RELEVANT = 1e-4;

/** What a shape says about its transform-limited envelope, as a closed form. */
function transformLimited(shape: PulseShape, fwhm: number): ClosedEnvelope {
  const peak = shape.envelope(0, fwhm);
  return {
    // A flat tone is switched by its edges; rounding of t at an edge must not switch it as well.
    magnitude: shape.flat ? () => peak : (t) => shape.envelope(t, fwhm),
    phase: 0,
    chirp: 0,
    peak,
    fwhm,
    absoluteArea: 1,
    timeScale: shape.timeScale(fwhm),
    reach: (eps) => shape.reach(fwhm, eps),
  };
}

/**
 * Relative field at which an envelope may be cut: 1e-11 rad of rotation per tail, so that neither populations
 * (1e-10) nor small multiphoton probabilities (1e-8 relative) see the cut. `absoluteArea` in rad.
 */
export function cutLevel(absoluteArea: number): number {
  return 1e-11 / Math.max(1, Math.abs(absoluteArea));
}

function fromClosed(closed: ClosedEnvelope, edges: readonly number[], area: number): Envelope {
  const reach = closed.reach(cutLevel(closed.absoluteArea * area));
  const excursion = Math.abs(2 * closed.chirp) * closed.reach(RELEVANT);
  return {
    start: -reach,
    end: reach,
    edges,
    peak: closed.peak,
    timeScale: closed.timeScale,
    frequencies: [-excursion, excursion],
    error: 0,
    form: { kind: 'closed', closed },
  };
}

function fromSpectrum(shape: PulseShape, tone: Tone): Envelope {
  const { fwhm } = tone;
  const dispersed = disperse(shape, fwhm, tone, tone.area, cutLevel);
  const relevant = Math.min(shape.spectralReach(fwhm, RELEVANT), dispersed.reach);
  const frequency = excursion(tone, relevant, shape.reach(fwhm, RELEVANT));
  return {
    start: dispersed.start,
    end: dispersed.end,
    edges: [],
    peak: dispersed.peak,
    timeScale: shape.timeScale(fwhm),
    frequencies: [-frequency, frequency],
    error: dispersed.error,
    form: { kind: 'table', dispersed },
  };
}

/**
 * Envelope of a tone after its own dispersion: in closed form where there is one, else through the spectrum.
 * @throws DispersionError when no grid can hold the dispersed pulse
 */
export function toneEnvelope(tone: Tone): Envelope {
  const shape = pulseShape(tone.shape);
  const { fwhm, gdd, tod, area } = tone;
  if (tod === 0 && shape.dispersed) return fromClosed(shape.dispersed(fwhm, gdd), [], area);
  if (tod === 0 && gdd === 0) return fromClosed(transformLimited(shape, fwhm), shape.edges(fwhm), area);
  return fromSpectrum(shape, tone);
}
