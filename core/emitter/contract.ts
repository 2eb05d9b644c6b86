import type { EmitterSpec } from '../design.js';

/** A bare level. Its energy in the frame that rotates at ω is `offset − excitons·(ω − exciton line)`. */
export interface Level {
  readonly name: string;
  /** Number of excitons S, also the number of drive quanta needed to reach the level. */
  readonly excitons: number;
  /** Energy/ħ relative to `excitons` times the mean exciton line, 1/ps. */
  readonly offset: number;
}

/** A driven transition: `½ (w_h Ω_h + w_v Ω_v) |upper⟩⟨lower| + h.c.` for a linear projection, `½ w_h Ω` for a full one. */
export interface Transition {
  readonly lower: number;
  readonly upper: number;
  readonly weightH: number;
  readonly weightV: number;
}

/** A radiative decay |to⟩⟨from|. Decays of one line and polarisation add coherently in the collected dipole. */
export interface Decay {
  readonly from: number;
  readonly to: number;
  /** 1/ps. */
  readonly rate: number;
  readonly line: string;
  readonly polarization: 'h' | 'v' | 'any';
}

/** A level scheme: all that the propagator and the counting need to know about an emitter. */
export interface Scheme {
  readonly levels: readonly Level[];
  readonly transitions: readonly Transition[];
  readonly decays: readonly Decay[];
  /** Pure dephasing γ*, 1/ps: the dissipator γ*·D[S] with S the exciton number. */
  readonly dephasing: number;
  /** `full`: the emitter takes every polarisation in full (one drive component); `linear`: h and v components. */
  readonly projection: 'full' | 'linear';
  /** Centre of each spectral line relative to the mean exciton line, 1/ps. */
  readonly lines: Readonly<Record<string, number>>;
  /** Half the biexciton energy relative to the mean exciton line, 1/ps; null without a biexciton. */
  readonly twoPhoton: number | null;
}

/** One emitter model of the registry. */
export interface EmitterModel {
  readonly name: string;
  readonly summary: string;
  /** Lines that can be collected. */
  readonly lines: readonly string[];
  /** Collected polarisations that the model can tell apart. */
  readonly polarizations: readonly string[];
  /** True when the study must give biexciton lifetime, binding and splitting. */
  readonly hasBiexciton: boolean;
  scheme(spec: EmitterSpec): Scheme;
}
