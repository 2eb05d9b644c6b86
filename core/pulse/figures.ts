import type { PulseFigures } from '../figures.js';
import type { Pulse, Tone } from './contract.js';
import { type Cell, halfMaximum, halfMaximumWidth } from './crossings.js';
import { createDrive, type Drive, type PulseDrive } from './drive.js';
import { pulseEnergy } from './energy.js';
import { pulseShape } from './shapes/registry.js';
import { type ToneSpectrum, toneSpectrum } from './spectrum.js';

/** Samples per radian of beating, and per characteristic time of an envelope. */
const PER_RADIAN = 2.5;
const PER_TIME = 8;
/** Spectral field, relative to a tone's area, below which half the maximum cannot lie. */
const SPECTRAL_FLOOR = 1e-3;
/** The same for spectra that fall as 1/ω only, 1/fwhm. */
const FLAT_REACH = 60;
/** 1/ps as an ordinary frequency, GHz. */
export const GHZ_PER_RADIAN = 1000 / (2 * Math.PI);

/** A drive whose components show every polarisation apart: the given one if it does, else a new one. */
export function polarizedDrive<D extends Drive>(pulse: Pulse, given: D | null): D | PulseDrive {
  const one = pulse.tones.every((tone) => tone.polarization === pulse.tones[0].polarization);
  if (given !== null && (given.components === 2 || one)) return given;
  const centers = pulse.tones.map((tone) => toneSpectrum(tone).center);
  const frame = 0.5 * (Math.min(...centers) + Math.max(...centers));
  return createDrive(pulse, { frame, projection: 'linear' });
}

/** |Ω_h|² + |Ω_v|² over the drive window. */
export function inTime({ cells, scales, sample }: Drive): Cell[] {
  const out = new Float64Array(4);
  const step = 1 / (PER_TIME / scales.time + PER_RADIAN * scales.frequency);
  return cells.map(({ from, to, segment, bound }) => ({
    from,
    to,
    step,
    bound: bound * bound,
    value: (t: number) => {
      sample(t, segment, out);
      return out[0] * out[0] + out[1] * out[1] + out[2] * out[2] + out[3] * out[3];
    },
  }));
}

const spectralReach = (tone: Tone, spectrum: ToneSpectrum): number =>
  Math.min(spectrum.reach(SPECTRAL_FLOOR), FLAT_REACH / tone.fwhm);

/** Largest difference of group delays within the bands of all tones, ps. */
function delaySpread(tones: readonly Tone[], spectra: readonly ToneSpectrum[]): number {
  let [early, late] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  spectra.forEach((spectrum, k) => {
    for (let i = -8; i <= 8; i++) {
      const delay = spectrum.groupDelay((spectralReach(tones[k], spectrum) * i) / 8);
      early = Math.min(early, delay);
      late = Math.max(late, delay);
    }
  });
  return late - early;
}

/** |E_h|² + |E_v|² over the bands of all tones. */
export function inFrequency(tones: readonly Tone[]): Cell[] {
  const spectra = tones.map(toneSpectrum);
  const low = Math.min(...spectra.map((s, k) => s.center - spectralReach(tones[k], s)));
  const high = Math.max(...spectra.map((s, k) => s.center + spectralReach(tones[k], s)));
  const longest = Math.max(...tones.map((tone) => tone.fwhm));
  const step = 1 / (PER_TIME * longest + PER_RADIAN * delaySpread(tones, spectra));
  const value = (omega: number) => {
    let [hr, hi, vr, vi] = [0, 0, 0, 0];
    for (let k = 0; k < spectra.length; k++) {
      const nu = omega - spectra[k].center;
      const amplitude = spectra[k].amplitude(nu);
      const phase = spectra[k].phase(nu);
      const re = amplitude * Math.cos(phase);
      const im = amplitude * Math.sin(phase);
      const h = Math.cos(tones[k].polarization);
      const v = Math.sin(tones[k].polarization);
      hr += h * re;
      hi += h * im;
      vr += v * re;
      vi += v * im;
    }
    return hr * hr + hi * hi + vr * vr + vi * vi;
  };
  const bound = (from: number, to: number) => {
    let sum = 0;
    for (const { center, bound } of spectra) sum += bound(Math.max(0, from - center, center - to));
    return sum * sum;
  };
  const count = Math.min(4096, Math.ceil((high - low) * longest));
  return Array.from({ length: count }, (_, i) => {
    const from = low + ((high - low) * i) / count;
    const to = low + ((high - low) * (i + 1)) / count;
    return { from, to, step, bound: bound(from, to), value };
  });
}

/** Half-maximum duration of one tone, ps, and its largest field, 1/ps, where the shape itself knows them; null otherwise. */
function knownInTime(tone: Tone): { readonly duration: number; readonly peak: number } | null {
  const shape = pulseShape(tone.shape);
  if (tone.tod !== 0) return null;
  if (tone.gdd === 0) return { duration: tone.fwhm, peak: tone.area * shape.envelope(0, tone.fwhm) };
  const dispersed = shape.dispersed?.(tone.fwhm, tone.gdd);
  return dispersed === undefined ? null : { duration: dispersed.fwhm, peak: tone.area * dispersed.peak };
}

const NOT_WANTED = { duration: Number.NaN, peak: Number.NaN };

function timeFigures(pulse: Pulse, drive: Drive | null): { duration: number; peak: number } {
  const known = pulse.tones.length === 1 ? knownInTime(pulse.tones[0]) : null;
  return known ?? scannedInTime(pulse, drive);
}

/** Half-maximum bandwidth, GHz. */
function spectralWidth({ tones }: Pulse): number {
  if (tones.length === 1) return (1000 * pulseShape(tones[0].shape).timeBandwidth) / tones[0].fwhm;
  return GHZ_PER_RADIAN * halfMaximumWidth(halfMaximum(inFrequency(tones)));
}

function scannedInTime(pulse: Pulse, drive: Drive | null): { duration: number; peak: number } {
  const half = halfMaximum(inTime(polarizedDrive(pulse, drive)));
  return { duration: halfMaximumWidth(half), peak: Math.sqrt(half.top) };
}

/**
 * Energy, duration, bandwidth and largest Rabi frequency of a pulse. Duration and bandwidth lie between the outermost
 * points at which |Ω_h|² + |Ω_v|² reaches half its maximum, in time and in frequency; of a pulse without any area they
 * are 0 unless it has a single tone, whose shape fixes them.
 * @param drive a drive of the same pulse, if there is one already: saves dispersing it again
 * @param piPulse measured resonant transform-limited Gaussian π pulse: energy in fJ, FWHM in ps
 * @param wanted the figures that are needed, null for all; others may come out as NaN
 * @throws DispersionError when a dispersed tone is spread over more samples than a transform can hold
 */
export function pulseFigures(
  pulse: Pulse,
  drive: Drive | null = null,
  piPulse: { readonly energy: number; readonly fwhm: number } | null = null,
  wanted: ReadonlySet<keyof PulseFigures> | null = null,
): PulseFigures {
  const [first] = pulse.tones;
  const gaussian = pulseShape('gaussian');
  const any = (...names: (keyof PulseFigures)[]) => wanted === null || names.some((name) => wanted.has(name));
  const energy = any('energy_pi_units', 'energy_fj') ? pulseEnergy(pulse) : Number.NaN;
  const { duration, peak } = any('duration_ps', 'peak_rabi_per_ps') ? timeFigures(pulse, drive) : NOT_WANTED;
  const bandwidth = any('bandwidth_ghz') ? spectralWidth(pulse) : Number.NaN;
  return {
    energy_pi_units: energy / (Math.PI ** 2 * gaussian.energy(first.fwhm)),
    duration_ps: duration,
    bandwidth_ghz: bandwidth,
    energy_fj: piPulse && (piPulse.energy * energy) / (Math.PI ** 2 * gaussian.energy(piPulse.fwhm)),
    peak_rabi_per_ps: peak,
  };
}
