import type { Pulse } from './pulse/contract.js';

/** Longitudinal-acoustic phonon bath, J(ω) = A ω³ exp(−ω²/ω_c²). */
export interface PhononSpec {
  /** A, ps². */
  readonly coupling: number;
  /** ω_c, 1/ps. */
  readonly cutoff: number;
  /** K. */
  readonly temperature: number;
  readonly method: 'auto' | 'polaron' | 'weak-coupling' | 'exact';
}

export interface EmitterSpec {
  /** Name of an emitter in the registry `core/emitter`. */
  readonly model: string;
  /** Exciton line, µm (vacuum). */
  readonly wavelength: number;
  /** Exciton lifetime, ps. */
  readonly lifetime: number;
  /** Biexciton lifetime, ps; null for emitters without a biexciton. */
  readonly biexcitonLifetime: number | null;
  /** Biexciton binding energy, meV (positive: biexciton line below the exciton line); null without a biexciton. */
  readonly binding: number | null;
  /** Fine-structure splitting (h above v), meV. */
  readonly splitting: number;
  /** Pure dephasing rate γ*, 1/ps. */
  readonly dephasing: number;
  readonly phonons: PhononSpec | null;
}

export interface FilterSpec {
  /** FWHM of the Lorentzian intensity transmission, GHz (ordinary frequency). */
  readonly fwhm: number;
  /** Centre above the collected line's mean, GHz. */
  readonly center: number;
}

export interface CollectionSpec {
  readonly line: 'exciton' | 'biexciton';
  readonly polarization: 'all' | 'crossed' | 'h' | 'v';
  /** 0 < η ≤ 1. */
  readonly efficiency: number;
  readonly filter: FilterSpec | null;
}

export interface LaserSpec {
  /** Repetition rate, MHz, or null if not stated. */
  readonly repetition: number | null;
  /** Measured resonant π pulse (transform-limited Gaussian): energy in fJ, FWHM in ps. */
  readonly piPulse: { readonly energy: number; readonly fwhm: number } | null;
  /** Laser intensity that reaches the collection / incident intensity. */
  readonly rejection: number;
}

/** Gaussian drifts, rms. */
export interface DriftSpec {
  /** Relative rms of every area in common. */
  readonly area: number;
  /** Relative rms of every width in common. */
  readonly width: number;
  /** Rms of the emitter's line, meV. */
  readonly detuning: number;
  /** Rms of the filter's centre, GHz. */
  readonly filterCenter: number;
  /** Null: a goal is judged on means. Else the share of the drift for which brightness and impurity must hold. */
  readonly quantile: number | null;
}

/** A complete design: every number is fixed and in internal units. `evaluate` takes this and nothing else. */
export interface Design {
  readonly emitter: EmitterSpec;
  readonly pulse: Pulse;
  readonly collection: CollectionSpec;
  readonly laser: LaserSpec | null;
  readonly drift: DriftSpec | null;
}
