/**
 * What a pulse is. Conventions: `Ω(t) = Σ_k e^{iφ_k} e^{−iδ_k t/ħ} · env_k(t − t_k)` with
 * `E(t) = ∫ E(ω) e^{−iωt} dω/2π`; positive GDD delays the high frequencies (up-chirp).
 */

/** One colour of the drive, in internal units. All fields are obligatory: defaults are the study reader's business. */
export interface Tone {
  /** Name of a shape in the registry `core/pulse/shapes`. */
  readonly shape: string;
  /** FWHM of the intensity |Ω|² of the transform-limited pulse, ps. */
  readonly fwhm: number;
  /** Area ∫ env dt before dispersion, rad. */
  readonly area: number;
  /** Centre, laser minus pulse reference, meV. */
  readonly detuning: number;
  /** Group-delay dispersion about the tone's own centre, ps². */
  readonly gdd: number;
  /** Third-order dispersion about the tone's own centre, ps³. */
  readonly tod: number;
  /** Delay of the envelope (the carrier is not delayed), ps. */
  readonly delay: number;
  /** Phase, rad. */
  readonly phase: number;
  /** Linear polarisation, angle from the h axis, rad. */
  readonly polarization: number;
}

export interface Pulse {
  /** What detunings count from: the mean exciton line, or half the biexciton energy. */
  readonly reference: 'exciton' | 'two-photon';
  readonly tones: readonly Tone[];
}
