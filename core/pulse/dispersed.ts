import {
  FFT_LIMIT,
  FourierPlan,
  interpolationError,
  interpolationStep,
  powerOfTwo,
  STENCIL,
  UniformTable,
} from '../numerics/index.js';
import { type Band, bands, bandWeight, support } from './band.js';
import type { PulseShape } from './shapes/contract.js';
import { type Dispersion, delayRange, dispersionPhase } from './spectrum.js';

/** A pulse that no grid can hold: an input error. */
export class DispersionError extends RangeError {}

/** Envelope of area 1 on a uniform grid, in the tone's own frame and about its own centre. */
export interface DispersedEnvelope {
  readonly table: UniformTable;
  /** ps. */
  readonly start: number;
  readonly end: number;
  /** 1/ps. */
  readonly peak: number;
  /** Upper bound of |env| between two times, 1/ps. */
  bound(from: number, to: number): number;
  /** |ν| up to which the spectrum was kept, 1/ps. */
  readonly reach: number;
  /** The transform that the table was cut from. */
  readonly origin: TransformGrid;
  /** Estimated error relative to the peak, with the price of the band. */
  readonly error: number;
}

/** Grid of a transform, and where a table cut from it begins. */
export interface TransformGrid {
  readonly band: Band;
  /** Time of the first sample, ps, and the step. */
  readonly start: number;
  readonly step: number;
  readonly size: number;
  /** Index of the sample with which the table begins. */
  readonly first: number;
}

/** Field below which tails are dropped from the grid. */
const TAIL = 1e-12;
/** Interpolation error aimed at, relative to the peak. */
const INTERPOLATION = 1e-11;
/** What the transform's own rounding leaves, relative to the peak (measured against closed forms: up to 1.4e-13). */
const ROUNDING = 2e-13;

/** Rounding of the transform and of the spectral phase at the edge of the band (measured: a fifth of it). */
function roundingOf(dispersion: Dispersion, reach: number): number {
  const phases = [reach, -reach].map((nu) => Math.abs(dispersionPhase(dispersion, nu)));
  return ROUNDING + Number.EPSILON * Math.max(...phases);
}

/** ∫ |S(ν)| |ν|^power dν/2π over the band: bounds that derivative of the envelope, 1/ps^(power+1). */
function spectralMoment(shape: PulseShape, fwhm: number, band: Band, power: number): number {
  const points = 2000;
  const step = band.reach / points;
  let sum = 0;
  for (let i = 1; i <= points; i++) {
    const nu = (i - 0.5) * step;
    sum += Math.abs(shape.spectrum(nu, fwhm)) * bandWeight(band, nu) * nu ** power;
  }
  return (sum * step) / Math.PI;
}

interface Grid {
  readonly band: Band;
  readonly start: number;
  readonly step: number;
  readonly size: number;
  readonly derivative: number;
}

/** The grid for the best band that fits. */
function chooseGrid(shape: PulseShape, fwhm: number, dispersion: Dispersion, area: number): Grid {
  let wanted = 0;
  let width = 0;
  for (const band of bands(shape, fwhm, dispersion, area)) {
    const [early, late] = support(shape, fwhm, dispersion, band, TAIL);
    width = late - early;
    // A pulse of this energy cannot have a lower peak if it fills the whole window.
    const peak = Math.sqrt(shape.energy(fwhm) / width);
    const derivative = spectralMoment(shape, fwhm, band, STENCIL);
    const step = Math.min(interpolationStep(derivative, INTERPOLATION * peak), (0.9 * Math.PI) / band.reach);
    wanted = width / step + 4 * STENCIL;
    const size = powerOfTwo(wanted);
    if (size <= FFT_LIMIT)
      return { band, start: early, step: width / (size - 4 * STENCIL), size, derivative };
  }
  throw new DispersionError(
    `dispersion: a ${fwhm} ps ${shape.name} pulse with GDD ${dispersion.gdd} ps² and TOD ${dispersion.tod} ps³ spreads over ` +
      `${width.toPrecision(3)} ps and would need ${wanted.toPrecision(2)} samples; at most ${FFT_LIMIT} are possible. ` +
      'Use less dispersion or a longer pulse.',
  );
}

/**
 * Calls `at` for every frequency of a transform's band: ν (1/ps), index into interleaved data, weight and phase such that
 * env(start + j·step) = Σ_ν weight · S(ν) e^{i·phase} e^{−2πi jk/N}, the sum for env(t) = ∫ S(ν) e^{iφ(ν)} e^{−iνt} dν/2π.
 */
export function overBand(
  { band, start, step, size }: Omit<TransformGrid, 'first'>,
  dispersion: Dispersion,
  at: (nu: number, index: number, weight: number, phase: number) => void,
): void {
  const spacing = (2 * Math.PI) / (size * step);
  const last = Math.min(Math.floor(band.reach / spacing), size / 2 - 1);
  for (let j = -last; j <= last; j++) {
    const nu = j * spacing;
    const weight = (bandWeight(band, nu) * spacing) / (2 * Math.PI);
    at(nu, 2 * (j < 0 ? j + size : j), weight, dispersionPhase(dispersion, nu) - nu * start);
  }
}

/** Samples of the envelope from its spectrum. */
function transform(shape: PulseShape, fwhm: number, dispersion: Dispersion, grid: Grid): Float64Array {
  const data = new Float64Array(2 * grid.size);
  // The grid starts 2 stencils before the support, so that reading near its ends stays central.
  const start = grid.start - 2 * STENCIL * grid.step;
  overBand({ ...grid, start }, dispersion, (nu, k, weight, phase) => {
    const amplitude = shape.spectrum(nu, fwhm) * weight;
    data[k] = amplitude * Math.cos(phase);
    data[k + 1] = amplitude * Math.sin(phase);
  });
  return new FourierPlan(grid.size).forward(data);
}

/**
 * Upper bound of the magnitude between two times, from maxima over bins of samples. Between two samples the magnitude
 * exceeds them by less than 1 % (the step is far below any period in the band), which is added.
 */
function binnedBound(magnitude: Float64Array, origin: number, step: number): DispersedEnvelope['bound'] {
  const bins = 512;
  const perBin = Math.ceil(magnitude.length / bins);
  const maxima = new Float64Array(bins);
  for (let j = 0; j < magnitude.length; j++) {
    const bin = Math.floor(j / perBin);
    if (magnitude[j] > maxima[bin]) maxima[bin] = magnitude[j];
  }
  return (from, to) => {
    const first = Math.max(0, Math.floor((from - origin) / step / perBin - 1 / perBin));
    const last = Math.min(bins - 1, Math.floor((to - origin) / step / perBin + 1 / perBin));
    let largest = 0;
    for (let bin = first; bin <= last; bin++) largest = Math.max(largest, maxima[bin]);
    return 1.01 * largest;
  };
}

/**
 * Envelope of area 1 after GDD and TOD (ps², ps³), by Fourier transform of the spectrum on a grid that holds all group
 * delays, read by interpolation. `area` (rad) only sets how far out the tails are kept.
 * @throws DispersionError when the pulse is spread over more samples than a transform can hold
 */
export function disperse(
  shape: PulseShape,
  fwhm: number,
  dispersion: Dispersion,
  area: number,
  level: (absoluteArea: number) => number,
): DispersedEnvelope {
  const grid = chooseGrid(shape, fwhm, dispersion, area);
  const samples = transform(shape, fwhm, dispersion, grid);
  const { size, step } = grid;
  const magnitude = new Float64Array(size);
  let peak = 0;
  let sum = 0;
  for (let j = 0; j < size; j++) {
    magnitude[j] = Math.sqrt(samples[2 * j] ** 2 + samples[2 * j + 1] ** 2);
    peak = Math.max(peak, magnitude[j]);
    sum += magnitude[j] * step;
  }
  const floor = Math.max(level(area * sum), TAIL) * peak;
  let first = 2 * STENCIL;
  let last = size - 1 - 2 * STENCIL;
  while (magnitude[first] < floor) first++;
  while (magnitude[last] < floor) last--;
  const origin = grid.start - 2 * STENCIL * step;
  const from = Math.max(0, first - STENCIL);
  const to = Math.min(size, last + STENCIL + 1);
  return {
    table: new UniformTable(origin + from * step, step, samples.slice(2 * from, 2 * to)),
    start: origin + (first - 1) * step,
    end: origin + (last + 1) * step,
    peak,
    bound: binnedBound(magnitude, origin, step),
    reach: grid.band.reach,
    origin: { band: grid.band, start: origin, step, size, first: from },
    error:
      grid.band.error +
      roundingOf(dispersion, grid.band.reach) +
      interpolationError(grid.derivative, step) / peak,
  };
}

/**
 * Largest instantaneous frequency about the tone's centre that matters for step rules, 1/ps: components up to
 * `reach`, as far as dispersion pulls them apart in time (for a Gaussian with GDD this is its closed form).
 */
export function excursion(dispersion: Dispersion, reach: number, duration: number): number {
  const [early, late] = delayRange(dispersion, reach);
  const spread = Math.max(-early, late) / duration;
  return (reach * spread) / Math.hypot(1, spread);
}
