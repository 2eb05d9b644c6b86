import type { PulseFigures } from '../../figures.js';
import { HBAR } from '../../units/constants.js';
import type { Pulse } from '../contract.js';
import { halfMaximum } from '../crossings.js';
import type { PulseDrive } from '../drive.js';
import { GHZ_PER_RADIAN, inFrequency, inTime, polarizedDrive } from '../figures.js';
import { pulseShape } from '../shapes/registry.js';
import { toneSpectrum } from '../spectrum.js';
import { energyDerivatives } from './energy.js';
import {
  AREA,
  DELAY,
  DETUNING,
  emptyDerivatives,
  FWHM,
  GDD,
  PHASE,
  POLARIZATION,
  TOD,
  TONE_SLOTS,
} from './layout.js';

/** What the figures of a pulse are made from. */
export interface PulseSetting {
  readonly pulse: Pulse;
  readonly drive: PulseDrive;
  readonly piPulse: { readonly energy: number; readonly fwhm: number } | null;
}

/** Derivatives (layout.ts) of one figure of a pulse; null where there are none: a tone with edges, or no light at all. */
export function pulseFigureDerivatives(
  figure: keyof PulseFigures,
  { pulse, drive, piPulse }: PulseSetting,
): Float64Array | null {
  switch (figure) {
    case 'energy_pi_units':
      return energyInPiUnits(pulse);
    case 'energy_fj':
      return piPulse && scaled(energyOf(pulse), piPulse.energy / piEnergy(piPulse.fwhm));
    case 'duration_ps':
      return timeDerivatives(pulse, drive)?.duration ?? null;
    case 'peak_rabi_per_ps':
      return timeDerivatives(pulse, drive)?.peak ?? null;
    case 'bandwidth_ghz':
      return bandwidth(pulse);
  }
}

const piEnergy = (fwhm: number): number => Math.PI ** 2 * pulseShape('gaussian').energy(fwhm);

const energyOf = (pulse: Pulse): Float64Array | null =>
  energyDerivatives(pulse, null, { axis: null, parallel: 1, perpendicular: 0 });

const scaled = (vector: Float64Array | null, factor: number): Float64Array | null =>
  vector?.map((x) => factor * x) ?? null;

/** The unit, a π pulse of the first tone's width, goes as 1/fwhm. By Euler's theorem the energy is ½ Σ area·∂/∂area. */
function energyInPiUnits(pulse: Pulse): Float64Array | null {
  const { tones } = pulse;
  const out = scaled(energyOf(pulse), 1 / piEnergy(tones[0].fwhm));
  if (out === null) return null;
  const energy = tones.reduce((sum, { area }, k) => sum + 0.5 * area * out[TONE_SLOTS * k + AREA], 0);
  out[FWHM] += energy / tones[0].fwhm;
  return out;
}

/** Derivatives of |E|² at one place, and by the place itself. */
interface Intensity {
  readonly slopes: Float64Array;
  readonly byPlace: number;
}

/** How the distance of two crossings of half the maximum moves: dx = (½ dI(top) − dI(x))/I′(x). */
function widthDerivatives(left: Intensity, top: Intensity, right: Intensity): Float64Array {
  return top.slopes.map(
    (atTop, i) =>
      (0.5 * atTop - right.slopes[i]) / right.byPlace - (0.5 * atTop - left.slopes[i]) / left.byPlace,
  );
}

function timeDerivatives(
  pulse: Pulse,
  given: PulseDrive,
): { duration: Float64Array; peak: Float64Array } | null {
  const drive = polarizedDrive(pulse, given);
  const half = halfMaximum(inTime(drive));
  if (!(half.top > 0)) return null;
  const places = [half.left, half.at, half.right];
  const intensities: Intensity[] = [];
  for (const t of places) {
    const cell = drive.cells.find(({ from, to }) => t >= from && t <= to);
    if (!cell) return null;
    const field = new Float64Array(2 * drive.components);
    drive.sample(t, cell.segment, field);
    const slopes = emptyDerivatives(pulse.tones.length);
    const samples = { times: [t], segments: [cell.segment], scalars: [field.map((x) => 2 * x)] };
    if (!drive.differentiate(samples, [slopes])) return null;
    intensities.push({ slopes, byPlace: rate(pulse, slopes, drive.frame) });
  }
  const [left, top, right] = intensities;
  return {
    duration: widthDerivatives(left, top, right),
    peak: top.slopes.map((x) => x / (2 * Math.sqrt(half.top))),
  };
}

/** dI/dt from the derivatives by parameters: envelopes move against their delays, carriers turn at their rates. */
function rate(pulse: Pulse, slopes: Float64Array, frame: number): number {
  return pulse.tones.reduce((sum, { detuning }, k) => {
    const at = TONE_SLOTS * k;
    return sum - slopes[at + DELAY] - (detuning / HBAR - frame) * slopes[at + PHASE];
  }, 0);
}

function bandwidth(pulse: Pulse): Float64Array | null {
  const { tones } = pulse;
  const half = halfMaximum(inFrequency(tones));
  if (!(half.top > 0)) return null;
  const [left, top, right] = [half.left, half.at, half.right].map((omega) => spectralIntensity(pulse, omega));
  return widthDerivatives(left, top, right).map((x) => GHZ_PER_RADIAN * x);
}

/** Derivatives of |E_h|² + |E_v|² at a frequency. */
function spectralIntensity({ tones }: Pulse, omega: number): Intensity {
  const slopes = emptyDerivatives(tones.length);
  const fields = tones.map((tone) => {
    const spectrum = toneSpectrum({ ...tone, area: 1 });
    const nu = omega - spectrum.center;
    const [amplitude, phase] = [spectrum.amplitude(nu), spectrum.phase(nu)];
    return { tone, spectrum, nu, amplitude, cos: Math.cos(phase), sin: Math.sin(phase) };
  });
  let [hr, hi, vr, vi] = [0, 0, 0, 0];
  for (const { tone, amplitude, cos, sin } of fields) {
    const [h, v] = [Math.cos(tone.polarization), Math.sin(tone.polarization)];
    hr += tone.area * amplitude * h * cos;
    hi += tone.area * amplitude * h * sin;
    vr += tone.area * amplitude * v * cos;
    vi += tone.area * amplitude * v * sin;
  }
  let byPlace = 0;
  fields.forEach(({ tone, spectrum, nu, amplitude, cos, sin }, k) => {
    const at = TONE_SLOTS * k;
    const [h, v] = [Math.cos(tone.polarization), Math.sin(tone.polarization)];
    const [re, im] = [h * hr + v * vr, h * hi + v * vi];
    const [crossRe, crossIm] = [h * vr - v * hr, h * vi - v * hi];
    // 2 Re(F* e^{iφ}) and 2 Re(i F* e^{iφ}).
    const along = 2 * (re * cos + im * sin);
    const turned = 2 * (im * cos - re * sin) * tone.area * amplitude;
    const steep = along * tone.area * pulseShape(tone.shape).spectrumSlope(nu, tone.fwhm);
    const byFrequency = steep + turned * spectrum.groupDelay(nu);
    slopes[at + AREA] = along * amplitude;
    slopes[at + FWHM] = (steep * nu) / tone.fwhm;
    slopes[at + DETUNING] = -byFrequency / HBAR;
    slopes[at + DELAY] = turned * nu;
    slopes[at + PHASE] = turned;
    slopes[at + POLARIZATION] = 2 * (crossRe * cos + crossIm * sin) * tone.area * amplitude;
    slopes[at + GDD] = (turned * nu * nu) / 2;
    slopes[at + TOD] = (turned * nu * nu * nu) / 6;
    byPlace += byFrequency;
  });
  return { slopes, byPlace };
}
