import {
  createDrive,
  type Design,
  evaluate,
  HBAR,
  PropagationError,
  photonEnergy,
  piPulseEnergy,
  pulseEnergy,
  pulseFigures,
  situation,
  type Tone,
  wavelengthAt,
} from '../../core/index.js';
import { biasOf, type Study } from '../study/index.js';
import { type ToneLines, toneLines } from './lines.js';
import { type PhononFacts, phononFacts } from './phonon-facts.js';

/** What follows from one tone. */
export interface ToneFacts extends ToneLines {
  readonly shape: string;
  /** Intensity FWHM before and after dispersion, ps. */
  readonly fwhm_ps: number;
  readonly duration_ps: number;
  /** Spectral intensity FWHM, GHz. */
  readonly bandwidth_ghz: number;
  /** Of the transform-limited pulse. */
  readonly time_bandwidth_product: number;
  /** Over that of a resonant transform-limited Gaussian π pulse of the tone's own width. */
  readonly energy_pi_units: number;
  /** Null when the study names no measured π pulse. */
  readonly energy_fj: number | null;
  /** max |Ω|, 1/ps and as ħΩ, meV. */
  readonly peak_rabi_per_ps: number;
  readonly peak_rabi_mev: number;
  /** Vacuum wavelength of the centre, nm. */
  readonly wavelength_nm: number;
}

/** What follows from a fixed design before any photon is counted. */
export interface DesignFacts {
  readonly tones: readonly ToneFacts[];
  readonly pulse: {
    readonly energy_pi_units: number;
    readonly energy_fj: number | null;
    readonly duration_ps: number;
    readonly bandwidth_ghz: number;
  };
  readonly emitter: {
    readonly exciton_energy_mev: number;
    /** Natural width of each line with pure dephasing, GHz: (γ + γ*)/2π of the exciton line. */
    readonly linewidth_ghz: number;
    /** Bias to set, mV; null without tuning. */
    readonly bias_mv: number | null;
  };
  /** Null without phonons. */
  readonly phonons: PhononFacts | null;
  readonly propagator: {
    /** Start and end of the drive window, ps. */
    readonly window_ps: readonly [number, number];
    /** Rotating frame above the mean exciton line, meV. */
    readonly frame_mev: number;
    /** Summed over the drift nodes; null when the pulse is beyond what can be integrated. */
    readonly steps: number | null;
    readonly failure: string | null;
  };
}

/** Largest |Ω| of a tone by dense sampling in its own frame, 1/ps. */
function peakRabi(tone: Tone): number {
  const pulse = { reference: 'exciton', tones: [tone] } as const;
  const { breakpoints, sample, scales } = createDrive(pulse, {
    frame: tone.detuning / HBAR,
    projection: 'full',
  });
  const out = new Float64Array(2);
  let peak = 0;
  for (let s = 0; s + 1 < breakpoints.length; s++) {
    const width = breakpoints[s + 1] - breakpoints[s];
    const points = Math.min(20_000, Math.max(64, 2 * Math.ceil((16 * width) / scales.time)));
    for (let i = 0; i <= points; i++) {
      sample(breakpoints[s] + (width * i) / points, s, out);
      peak = Math.max(peak, Math.hypot(out[0], out[1]));
    }
  }
  return peak;
}

/** fJ per unit of ∫|Ω|²dt; null when the study names no measured π pulse. */
function energyScale(design: Design): number | null {
  const pi = design.laser?.piPulse;
  return pi ? pi.energy / piPulseEnergy(pi.fwhm) : null;
}

function toneFacts(design: Design, tone: Tone): ToneFacts {
  const { twoPhoton } = situation(design).scheme;
  const reference = design.pulse.reference === 'two-photon' ? (twoPhoton ?? 0) * HBAR : 0;
  const alone = { reference: design.pulse.reference, tones: [{ ...tone, delay: 0 }] } as const;
  const shape = pulseFigures(alone);
  const energy = pulseEnergy(alone);
  const scale = energyScale(design);
  const peak = peakRabi(tone);
  return {
    shape: tone.shape,
    fwhm_ps: tone.fwhm,
    duration_ps: shape.duration_ps,
    bandwidth_ghz: shape.bandwidth_ghz,
    time_bandwidth_product: (tone.fwhm * shape.bandwidth_ghz) / 1000,
    energy_pi_units: energy / piPulseEnergy(tone.fwhm),
    energy_fj: scale === null ? null : energy * scale,
    peak_rabi_per_ps: peak,
    peak_rabi_mev: peak * HBAR,
    wavelength_nm: 1000 * wavelengthAt(design.emitter.wavelength, reference + tone.detuning),
    ...toneLines(design, tone, shape.bandwidth_ghz),
  };
}

function propagatorFacts(design: Design): DesignFacts['propagator'] {
  const { drive, frame } = situation(design);
  const { breakpoints } = drive;
  const base = {
    window_ps: [breakpoints[0], breakpoints[breakpoints.length - 1]] as const,
    frame_mev: frame * HBAR,
  };
  try {
    return { ...base, steps: evaluate(design, 'search').accuracy.steps, failure: null };
  } catch (error) {
    if (!(error instanceof PropagationError)) throw error;
    return { ...base, steps: null, failure: error.message };
  }
}

/**
 * Derived quantities of a fixed design of a study.
 * @throws UnsupportedDesign, DispersionError as `evaluate` does
 */
export function designFacts(study: Pick<Study, 'tuning'>, design: Design): DesignFacts {
  const { emitter, pulse } = design;
  const whole = pulseFigures(pulse);
  const scale = energyScale(design);
  return {
    tones: pulse.tones.map((tone) => toneFacts(design, tone)),
    pulse: { ...whole, energy_fj: scale === null ? null : scale * pulseEnergy(pulse) },
    emitter: {
      exciton_energy_mev: photonEnergy(emitter.wavelength),
      linewidth_ghz: ((1 / emitter.lifetime + emitter.dephasing) * 1000) / (2 * Math.PI),
      bias_mv: biasOf(study, design),
    },
    phonons: phononFacts(design),
    propagator: propagatorFacts(design),
  };
}
