import { overPieces } from '../../numerics/index.js';
import { HBAR } from '../../units/constants.js';
import type { Pulse, Tone } from '../contract.js';
import {
  crossIntegral,
  lorentzian,
  ownIntegral,
  projections,
  type SpectralFilter,
  type SpectralIntegral,
} from '../energy.js';
import { pulseShape } from '../shapes/registry.js';
import { toneSpectrum } from '../spectrum.js';
import {
  AREA,
  centerSlot,
  DELAY,
  DETUNING,
  emptyDerivatives,
  FWHM,
  GDD,
  kappaSlot,
  PHASE,
  POLARIZATION,
  TOD,
  TONE_SLOTS,
} from './layout.js';

/** What is measured: `parallel` and `perpendicular` times the energies along and across the axis (see `transmittedEnergy`). */
export interface EnergyWeights {
  /** Rad from h; `first` is the polarisation of the first tone, with which it turns; null for no analyser. */
  readonly axis: number | 'first' | null;
  readonly parallel: number;
  readonly perpendicular: number;
}

/** Derivatives of a pair's term by one tone's slots, twice, and by κ and centre. */
const PAIR_KAPPA = 2 * TONE_SLOTS;
const PAIR_CENTER = PAIR_KAPPA + 1;

/**
 * Adds weight times the integrals of the derivatives of S_a S_b cos(φ_a − φ_b) T, for tones of area 1 as they stand in the
 * integral; a = b is a tone's own energy, of which half falls to either place.
 */
function integrateSlopes(
  a: Tone,
  b: Tone,
  filter: SpectralFilter | null,
  { pieces, weight }: SpectralIntegral,
  into: Float64Array,
): void {
  const one = toneSpectrum({ ...a, area: 1 });
  const two = toneSpectrum({ ...b, area: 1 });
  const shapes = [pulseShape(a.shape), pulseShape(b.shape)];
  const half = filter ? filter.kappa / 2 : 1;
  overPieces(pieces, (omega, share) => {
    const nu = omega - one.center;
    const mu = omega - two.center;
    const pass = filter ? lorentzian(filter, omega) : 1;
    const w = (share * weight(omega)) / (2 * Math.PI);
    const [s, u] = [one.amplitude(nu), two.amplitude(mu)];
    const fringe = one.phase(nu) - two.phase(mu);
    const along = w * pass * Math.cos(fringe);
    const across = -w * pass * s * u * Math.sin(fringe);
    const slopes = [
      along * u * shapes[0].spectrumSlope(nu, a.fwhm),
      along * s * shapes[1].spectrumSlope(mu, b.fwhm),
    ];
    for (let k = 0; k < 2; k++) {
      const at = TONE_SLOTS * k;
      const x = k === 0 ? nu : mu;
      const { fwhm } = k === 0 ? a : b;
      const turn = k === 0 ? across : -across;
      const delay = k === 0 ? one.groupDelay(nu) : two.groupDelay(mu);
      into[at + FWHM] += (slopes[k] * x) / fwhm;
      into[at + DETUNING] -= (slopes[k] + turn * delay) / HBAR;
      into[at + DELAY] += turn * x;
      into[at + PHASE] += turn;
      into[at + GDD] += (turn * x * x) / 2;
      into[at + TOD] += (turn * x * x * x) / 6;
    }
    if (filter === null) return;
    const offset = (omega - filter.center) / half;
    const steep = (2 * offset * pass * along * s * u) / half;
    into[PAIR_KAPPA] += (steep * offset) / 2;
    into[PAIR_CENTER] += steep;
  });
}

interface PairTerm {
  /** Re ∫ E_a E_b* T dω/2π of tones of area 1. */
  readonly value: number;
  /** By slots of a, slots of b, κ and centre. */
  readonly slopes: Float64Array;
}

function ownTerm(tone: Tone, filter: SpectralFilter | null): PairTerm | null {
  const slopes = new Float64Array(PAIR_CENTER + 1);
  const shape = pulseShape(tone.shape);
  if (filter === null) {
    const value = shape.energy(tone.fwhm);
    slopes[FWHM] = slopes[TONE_SLOTS + FWHM] = -value / (2 * tone.fwhm);
    return { value, slopes };
  }
  if (shape.flat) return null;
  const closed = shape.filteredEnergy?.(tone.fwhm, filter.kappa, filter.center - tone.detuning / HBAR);
  if (closed) {
    slopes[FWHM] = slopes[TONE_SLOTS + FWHM] = closed.byFwhm / 2;
    slopes[DETUNING] = slopes[TONE_SLOTS + DETUNING] = -closed.byOffset / (2 * HBAR);
    slopes[PAIR_KAPPA] = closed.byKappa;
    slopes[PAIR_CENTER] = closed.byOffset;
    return { value: closed.value, slopes };
  }
  const integral = ownIntegral(tone, filter);
  integrateSlopes(tone, tone, filter, integral, slopes);
  return { value: integral.value, slopes };
}

function crossTerm(a: Tone, b: Tone, filter: SpectralFilter | null, scale: number): PairTerm | null {
  const slopes = new Float64Array(PAIR_CENTER + 1);
  if (pulseShape(a.shape).flat || pulseShape(b.shape).flat) return null;
  const [one, two] = [
    { ...a, area: 1 },
    { ...b, area: 1 },
  ];
  const integral = crossIntegral(one, two, filter, scale);
  if (integral !== null) integrateSlopes(a, b, filter, integral, slopes);
  return { value: integral?.value ?? 0, slopes };
}

/** Derivatives of the analyser's weight of a pair by the polarisations of its tones and by the axis. */
function turnings(a: number, b: number, axis: number | null, weights: EnergyWeights) {
  const { parallel, perpendicular } = weights;
  if (axis === null) return { a: -parallel * Math.sin(a - b), b: parallel * Math.sin(a - b), axis: 0 };
  const [ca, sa, cb, sb] = [Math.cos(a - axis), Math.sin(a - axis), Math.cos(b - axis), Math.sin(b - axis)];
  const byA = -parallel * sa * cb + perpendicular * ca * sb;
  const byB = -parallel * ca * sb + perpendicular * sa * cb;
  return { a: byA, b: byB, axis: -byA - byB };
}

/**
 * Derivatives (layout.ts) of parallel·E_∥ + perpendicular·E_⊥, the energies of `transmittedEnergy` in 1/ps; null where a
 * tone has edges.
 */
export function energyDerivatives(
  pulse: Pulse,
  filter: SpectralFilter | null,
  weights: EnergyWeights,
): Float64Array | null {
  const { tones } = pulse;
  const axis = weights.axis === 'first' ? tones[0].polarization : weights.axis;
  const out = emptyDerivatives(tones.length);
  const own = tones.map((tone) => ownTerm(tone, filter));
  if (!own.every((term) => term !== null)) return null;
  for (let k = 0; k < tones.length; k++) {
    for (let l = 0; l < k; l++) {
      const term = crossTerm(tones[k], tones[l], filter, Math.sqrt(own[k].value * own[l].value));
      if (term === null) return null;
      addPair(out, tones, [k, l], term, axis, weights);
    }
    addPair(out, tones, [k, k], own[k], axis, weights);
  }
  return out;
}

function addPair(
  out: Float64Array,
  tones: readonly Tone[],
  [k, l]: readonly [number, number],
  { value, slopes }: PairTerm,
  axis: number | null,
  weights: EnergyWeights,
): void {
  const [a, b] = [tones[k], tones[l]];
  const { along, across } = projections(a.polarization, b.polarization, axis);
  const pair = k === l ? 1 : 2;
  const share = pair * (weights.parallel * along + weights.perpendicular * across);
  const areas = a.area * b.area;
  for (const [place, tone, other] of [
    [0, k, b],
    [TONE_SLOTS, l, a],
  ] as const) {
    for (let slot = 0; slot < TONE_SLOTS; slot++)
      out[TONE_SLOTS * tone + slot] += share * areas * slopes[place + slot];
    out[TONE_SLOTS * tone + AREA] += share * other.area * value;
  }
  const turning = turnings(a.polarization, b.polarization, axis, weights);
  out[TONE_SLOTS * k + POLARIZATION] += pair * areas * value * turning.a;
  out[TONE_SLOTS * l + POLARIZATION] += pair * areas * value * turning.b;
  if (weights.axis === 'first') out[POLARIZATION] += pair * areas * value * turning.axis;
  out[kappaSlot(tones.length)] += share * areas * slopes[PAIR_KAPPA];
  out[centerSlot(tones.length)] += share * areas * slopes[PAIR_CENTER];
}
