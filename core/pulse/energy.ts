import { type Interval, integrate } from '../numerics/index.js';
import { HBAR } from '../units/constants.js';
import { bandWeight } from './band.js';
import type { Pulse, Tone } from './contract.js';
import { flatPair, type SpectralFilter } from './flat.js';
import { pulseShape } from './shapes/registry.js';
import { type ToneSpectrum, toneSpectrum } from './spectrum.js';

export type { SpectralFilter } from './flat.js';

/** Energies in units of ∫|Ω|² dt, 1/ps. */
export interface PolarizedEnergy {
  /** Polarised along the axis; everything when no axis is given. */
  readonly parallel: number;
  /** Polarised perpendicular to the axis. */
  readonly perpendicular: number;
}

/** Spectral fields below this, relative to a tone's area, carry nothing that counts. */
const FIELD_FLOOR = 1e-12;
/** Where the band of two tones whose spectra fall as 1/ω begins and ends, as multiples of 1/fwhm. */
const FLAT_REACH = [60, 1e5] as const;
/** Relative phase at the edge of that band, rad, by which a smooth fade leaves nothing behind. */
const FLAT_PHASE = 400;
/** Radians of relative phase per starting interval of the quadrature. */
const PHASE_PER_PIECE = 6;
/** Largest number of starting intervals. */
const PIECES = 20_000;

export const lorentzian = ({ kappa, center }: SpectralFilter, omega: number): number =>
  1 / (1 + ((omega - center) / (kappa / 2)) ** 2);

function filterBreaks(filter: SpectralFilter | null): number[] {
  if (!filter) return [];
  const breaks = [filter.center];
  for (let width = filter.kappa / 2; width < 1e3; width *= 5) {
    breaks.push(filter.center - width, filter.center + width);
  }
  return breaks;
}

interface SharedBand {
  readonly low: number;
  readonly high: number;
  readonly weight: (omega: number) => number;
}

/**
 * Frequencies that two tones share. If neither spectrum ever ends, the interval grows until their relative phase turns
 * many times, and fades out there: what is left out then cancels itself.
 */
function sharedBand(a: ToneSpectrum, b: ToneSpectrum, fwhm: number): SharedBand {
  const low = Math.max(a.center - a.reach(FIELD_FLOOR), b.center - b.reach(FIELD_FLOOR));
  const high = Math.min(a.center + a.reach(FIELD_FLOOR), b.center + b.reach(FIELD_FLOOR));
  if (Number.isFinite(high)) return { low, high, weight: () => 1 };
  const middle = 0.5 * (a.center + b.center);
  const relative = (omega: number) => a.phase(omega - a.center) - b.phase(omega - b.center);
  const turns = (reach: number) =>
    Math.min(
      Math.abs(relative(middle + reach) - relative(middle)),
      Math.abs(relative(middle - reach) - relative(middle)),
    );
  let reach = FLAT_REACH[0] / fwhm + Math.abs(a.center - b.center);
  while (turns(reach) < FLAT_PHASE && reach < FLAT_REACH[1] / fwhm) reach *= 1.3;
  const band = { flat: 0.6 * reach, reach, error: 0 };
  return { low: middle - reach, high: middle + reach, weight: (omega) => bandWeight(band, omega - middle) };
}

/** Break points so close that the relative phase of two tones turns by a few radians between them. */
function fringeBreaks(a: ToneSpectrum, b: ToneSpectrum, low: number, high: number): number[] {
  const chunks = 32;
  const breaks: number[] = [];
  const rate = (omega: number) => Math.abs(a.groupDelay(omega - a.center) - b.groupDelay(omega - b.center));
  for (let i = 0; i < chunks; i++) {
    const left = low + ((high - low) * i) / chunks;
    const right = low + ((high - low) * (i + 1)) / chunks;
    const fastest = Math.max(rate(left), rate(right), rate(0.5 * (left + right)));
    const wanted = Math.ceil((fastest * (right - left)) / PHASE_PER_PIECE);
    const pieces = Math.max(1, Math.min(PIECES / chunks, wanted));
    for (let j = 0; j < pieces; j++) breaks.push(left + ((right - left) * j) / pieces);
  }
  return breaks;
}

/** An integral over frequencies with the intervals that its quadrature chose, and what fades its integrand out. */
export interface SpectralIntegral {
  readonly value: number;
  readonly pieces: readonly Interval[];
  readonly weight: (omega: number) => number;
}

/** ∫ S² T dω/2π of one tone of area 1 behind the filter, by quadrature. */
export function ownIntegral(tone: Tone, filter: SpectralFilter): SpectralIntegral {
  const spectrum = toneSpectrum({ ...tone, area: 1 });
  const reach = spectrum.reach(FIELD_FLOOR);
  const { center } = spectrum;
  const integrand = (omega: number) => spectrum.amplitude(omega - center) ** 2 * lorentzian(filter, omega);
  const breaks = [center - reach / 4, center, center + reach / 4, ...filterBreaks(filter)];
  const options = { relative: 1e-10, breaks };
  const { value, pieces } = integrate(integrand, center - reach, center + reach, options);
  return { value: value / (2 * Math.PI), pieces, weight: () => 1 };
}

/** ∫|Ω|² of one tone behind the filter. */
function ownEnergy(tone: Tone, filter: SpectralFilter | null): number {
  if (tone.area === 0) return 0;
  const shape = pulseShape(tone.shape);
  if (!filter) return tone.area * tone.area * shape.energy(tone.fwhm);
  // Dispersion only turns phases, and one tone has nothing to interfere with.
  if (shape.flat) return flatPair(tone, tone, filter);
  const closed = shape.filteredEnergy?.(tone.fwhm, filter.kappa, filter.center - tone.detuning / HBAR);
  return tone.area * tone.area * (closed ?? ownIntegral(tone, filter)).value;
}

/** Interference of tones k ≠ l behind the filter: Re ∫ E_k E_l* T dω/2π, known to 1e-12 of `scale`. */
function crossEnergy(a: Tone, b: Tone, filter: SpectralFilter | null, scale: number): number {
  if (scale === 0) return 0;
  const alike = a.gdd === b.gdd && a.tod === b.tod && a.detuning === b.detuning;
  const plain = a.gdd === 0 && a.tod === 0 && b.gdd === 0 && b.tod === 0;
  if (pulseShape(a.shape).flat && pulseShape(b.shape).flat && (alike || plain)) return flatPair(a, b, filter);
  return crossIntegral(a, b, filter, scale)?.value ?? 0;
}

/** The same by quadrature; null where the tones share no frequency. */
export function crossIntegral(
  a: Tone,
  b: Tone,
  filter: SpectralFilter | null,
  scale: number,
): SpectralIntegral | null {
  const one = toneSpectrum(a);
  const two = toneSpectrum(b);
  const { low, high, weight } = sharedBand(one, two, Math.min(a.fwhm, b.fwhm));
  if (low >= high) return null;
  const integrand = (omega: number) => {
    const nu = omega - one.center;
    const mu = omega - two.center;
    const product = one.amplitude(nu) * two.amplitude(mu) * weight(omega);
    if (product === 0) return 0;
    const fringe = product * Math.cos(one.phase(nu) - two.phase(mu));
    return filter ? fringe * lorentzian(filter, omega) : fringe;
  };
  const breaks = [...fringeBreaks(one, two, low, high), one.center, two.center, ...filterBreaks(filter)];
  const options = { relative: 0, absolute: 1e-12 * 2 * Math.PI * scale, breaks, intervals: 2 * PIECES };
  const { value, pieces } = integrate(integrand, low, high, options);
  return { value: value / (2 * Math.PI), pieces, weight };
}

/** Weights of the product of two polarised fields behind an analyser along the axis and across it. */
export function projections(a: number, b: number, axis: number | null): { along: number; across: number } {
  if (axis === null) return { along: Math.cos(a - b), across: 0 };
  return {
    along: Math.cos(a - axis) * Math.cos(b - axis),
    across: Math.sin(a - axis) * Math.sin(b - axis),
  };
}

/**
 * ∫ |Ω(ω)|² T(ω) dω/2π, split by polarisation along and across `axis` (rad from h), 1/ps. Beating between tones is
 * included; relative error at most 1e-8 however far the tones lie off the filter, and 1e-10 without a filter, as long
 * as the tones do not cancel each other; 1e-6 for the beating of two differently dispersed square tones.
 */
export function transmittedEnergy(
  pulse: Pulse,
  filter: SpectralFilter | null,
  analyser: { readonly axis: number | null },
): PolarizedEnergy {
  const { tones } = pulse;
  const own = tones.map((tone) => ownEnergy(tone, filter));
  let parallel = 0;
  let perpendicular = 0;
  for (let k = 0; k < tones.length; k++) {
    for (let l = 0; l <= k; l++) {
      const weights = projections(tones[k].polarization, tones[l].polarization, analyser.axis);
      const term = k === l ? own[k] : 2 * crossEnergy(tones[k], tones[l], filter, Math.sqrt(own[k] * own[l]));
      parallel += weights.along * term;
      perpendicular += weights.across * term;
    }
  }
  // Tones that cancel each other leave rounding of either sign.
  return { parallel: Math.max(0, parallel), perpendicular: Math.max(0, perpendicular) };
}

/** ∫(|Ω_h|² + |Ω_v|²) dt, 1/ps, beating between tones included. */
export function pulseEnergy(pulse: Pulse): number {
  return transmittedEnergy(pulse, null, { axis: null }).parallel;
}
