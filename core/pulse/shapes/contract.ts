/** Envelope of area 1 in closed form, about its own centre: `env(t) = magnitude(t)·e^{i(phase + chirp·t²)}`. */
export interface ClosedEnvelope {
  /** |env(t)|, 1/ps; falls off monotonically from t = 0 to either side. */
  magnitude(t: number): number;
  /** Constant phase, rad. */
  readonly phase: number;
  /** Quadratic phase, rad/ps²; the instantaneous frequency is −2·chirp·t. */
  readonly chirp: number;
  /** Largest magnitude, 1/ps. */
  readonly peak: number;
  /** Full width at half maximum of |env|², ps. */
  readonly fwhm: number;
  /** ∫|env| dt. */
  readonly absoluteArea: number;
  /** Characteristic time of the magnitude, ps. */
  readonly timeScale: number;
  /** |t| beyond which |env| < eps·peak, ps. */
  reach(eps: number): number;
  /** Where the magnitude is a Gaussian peak·exp(−fall·t²): its fall, 1/ps². */
  readonly fall?: number;
}

/**
 * Writes the derivatives of an envelope of area 1 over the envelope itself, as re, im pairs: by time (1/ps), by FWHM (1/ps),
 * by GDD (1/ps²), by TOD (1/ps³). Dispersion multiplies the spectrum by a phase, so ∂/∂GDD = −(i/2)∂²/∂t² and
 * ∂/∂TOD = ⅙ ∂³/∂t³ hold for every shape.
 */
export type EnvelopeSlopes = (t: number, out: Float64Array) => void;

/** ∫ spectrum² T dω/2π behind a Lorentzian T of FWHM κ, 1/ps, with its derivatives by FWHM, κ and the filter's offset. */
export interface FilteredEnergy {
  readonly value: number;
  readonly byFwhm: number;
  readonly byKappa: number;
  readonly byOffset: number;
}

/** A transform-limited pulse shape, scaled to area 1, with the FWHM (ps) of its intensity as only parameter. */
export interface PulseShape {
  readonly name: string;
  readonly summary: string;
  /** FWHM of |env|² in ps times FWHM of |spectrum|² as an ordinary frequency in THz. */
  readonly timeBandwidth: number;
  /** Field envelope, 1/ps; at a discontinuity the value inside the pulse. */
  envelope(t: number, fwhm: number): number;
  /** ∫ env e^{iωt} dt (real and even, 1 at ω = 0); ω in 1/ps. */
  spectrum(omega: number, fwhm: number): number;
  /** Derivative of the spectrum by ω, ps. */
  spectrumSlope(omega: number, fwhm: number): number;
  /** Characteristic time of the envelope, ps: field σ, T of sech(t/T), or the whole width of a square. */
  timeScale(fwhm: number): number;
  /** |t| beyond which the envelope is below eps times its peak, ps. */
  reach(fwhm: number, eps: number): number;
  /** Largest |spectrum| at or beyond |ω| (ω ≥ 0). */
  spectralBound(omega: number, fwhm: number): number;
  /** |ω| beyond which |spectrum| < eps, 1/ps; Infinity when it falls too slowly to be cut there. */
  spectralReach(fwhm: number, eps: number): number;
  /** Times of discontinuities of the envelope, ps, ascending. */
  edges(fwhm: number): readonly number[];
  /** True when the envelope is constant between its edges and zero outside. */
  readonly flat: boolean;
  /** Dispersed by `gdd` (ps²) alone, where a closed form exists. */
  readonly dispersed?: (fwhm: number, gdd: number) => ClosedEnvelope;
  /** Derivatives of the envelope dispersed by `gdd` (ps²) alone; null where there is no closed form or there are edges. */
  slopes(fwhm: number, gdd: number): EnvelopeSlopes | null;
  /** Energy behind a filter of FWHM κ (1/ps), `offset` (1/ps) above the pulse's centre, where a closed form exists. */
  readonly filteredEnergy?: (fwhm: number, kappa: number, offset: number) => FilteredEnergy;
  /** ∫ env² dt, 1/ps; inversely proportional to the FWHM. */
  energy(fwhm: number): number;
}
