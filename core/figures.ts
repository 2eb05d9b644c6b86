/** What `evaluate` returns: plain data, the JSON of `pulsewright evaluate` without its format line. */

/** Emitted basis: every photon of the collected line and polarisation, counted by jump operators, before the path. */
export interface EmittedFigures {
  readonly mean: number;
  /** ⟨n(n−1)⟩. */
  readonly factorial2: number;
  /** Pulse-wise g⁽²⁾[0]; null when nothing is emitted. */
  readonly g2: number | null;
  /** p_0 … p_3. */
  readonly p: readonly number[];
  /** P(n≥2). */
  readonly multiphoton: number;
}

/** Filtered basis: what leaves the Lorentzian filter, before efficiency. Null fields have a note with the reason. */
export interface FilteredFigures {
  readonly mean: number;
  readonly factorial2: number;
  readonly g2: number | null;
  /** p_0, p_1; null where the moment series is too short. */
  readonly p: readonly number[] | null;
  readonly multiphoton: number | null;
}

/** Signal: after polariser, filter and efficiency, without laser leakage. */
export interface SignalFigures {
  readonly mean: number;
  readonly single: number | null;
  readonly any: number | null;
  readonly multiphoton: number | null;
  readonly g2: number | null;
}

/** Collected: signal plus leaked laser light. */
export interface CollectedFigures extends SignalFigures {
  /** Leaked laser photons per pulse. */
  readonly leakage: number;
}

export interface PulseFigures {
  /** Pulse energy over that of a resonant transform-limited Gaussian π pulse of the first tone's width. */
  readonly energy_pi_units: number;
  /** Between the outermost half-maximum crossings of |Ω(t)|², ps. */
  readonly duration_ps: number;
  /** Between the outermost half-maximum crossings of |Ω(ω)|², GHz. */
  readonly bandwidth_ghz: number;
  /** Pulse energy, fJ; null unless the design has a measured π pulse (`laser.piPulse`). */
  readonly energy_fj: number | null;
  /** Largest Rabi frequency √(|Ω_h|² + |Ω_v|²), 1/ps (angular). */
  readonly peak_rabi_per_ps: number;
}

export interface Note {
  /** Path of the figure the note is about, such as `filtered.multiphoton`, or `accuracy` or `phonons`. */
  readonly path: string;
  readonly reason: string;
}

export interface FigureTree {
  readonly emitted: EmittedFigures;
  readonly filtered: FilteredFigures | null;
  readonly signal: SignalFigures;
  readonly collected: CollectedFigures;
  /** At the end of the drive window, by level name. */
  readonly populations: Readonly<Record<string, number>>;
  readonly pulse: PulseFigures;
  readonly phonons: {
    readonly method: 'none' | 'polaron' | 'weak-coupling' | 'exact';
    /** What is wrong with the figures, such as an unphysical probability; empty for sound ones. */
    readonly flags: readonly string[];
  };
  readonly accuracy: {
    /** Steps of the propagator (summed over drift nodes). */
    readonly steps: number;
    /**
     * Largest estimated error over the promised figures, as a relative error of means, g2, p_2 and P(n≥2)
     * (floored at 1e-7), and of p_0, p_1 as absolute error times 1000: the promise is kept when it is ≤ 1e-6.
     */
    readonly error_estimate: number;
  };
  readonly notes: readonly Note[];
}

/** Figures over a stated share of the drift: brightness at least, impurity at most that high. */
export interface QuantileFigures {
  readonly share: number;
  readonly signal: Readonly<Record<'single' | 'any' | 'mean', number | null>>;
  readonly collected: Readonly<Record<'multiphoton' | 'g2', number | null>>;
}

export interface Figures extends FigureTree {
  /** What goals are judged on where `drift.judge` is `quantile`; null otherwise. */
  readonly quantile: QuantileFigures | null;
  /** With drift: the same tree without it; null without drift. */
  readonly nominal: FigureTree | null;
}
