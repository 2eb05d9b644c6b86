import type { Design, Figures } from '../../core/index.js';
import type { FreeParameter, Goal, ProblemSpec } from '../../optimizers/index.js';
import { design, tone, twoLevelEmitter } from '../support.js';

/** A stand-in for `evaluate`: cheap closed forms with several branches (odd multiples of π), not physics to rely on. */
export function toyEvaluate(design: Design): Figures {
  const [tone] = design.pulse.tones;
  const chirp = tone.gdd / (tone.fwhm * tone.fwhm);
  const off = (tone.detuning * tone.fwhm) / (1 + tone.area);
  const flip = Math.sin(tone.area / 2) ** 2 / (1 + off * off);
  const single = flip * Math.exp(-0.05 * chirp * chirp) * (1 - (0.1 * tone.fwhm) / design.emitter.lifetime);
  const duration = tone.fwhm * Math.sqrt(1 + chirp * chirp) * (1 + 5 / tone.fwhm ** 2);
  const multiphoton = (0.4 * flip * duration * (1 + 0.3 * tone.area)) / design.emitter.lifetime + 1e-6;
  const counts = {
    mean: single,
    single,
    any: single,
    multiphoton,
    g2: multiphoton / Math.max(single, 1e-12) ** 2,
  };
  return {
    emitted: {
      mean: single,
      factorial2: 2 * multiphoton,
      g2: counts.g2,
      p: [1 - single, single],
      multiphoton,
    },
    filtered: null,
    signal: counts,
    collected: { ...counts, leakage: 0 },
    populations: {},
    pulse: {
      energy_pi_units: 1,
      duration_ps: duration,
      bandwidth_ghz: 1,
      energy_fj: tone.area ** 2 / tone.fwhm,
      peak_rabi_per_ps: tone.area / duration,
    },
    phonons: { method: 'none', flags: [] },
    accuracy: { steps: 1, error_estimate: 0 },
    notes: [],
    nominal: null,
    quantile: null,
  };
}

const TONE = tone({ fwhm: 3 });

export const range = (
  path: string,
  from: number,
  to: number,
  scale: 'linear' | 'log' = 'linear',
): FreeParameter => ({ kind: 'range', path, from, to, scale });

export const FOUR: readonly FreeParameter[] = [
  range('pulse.tones.0.fwhm', 1, 100, 'log'),
  range('pulse.tones.0.area', 0, 8 * Math.PI),
  range('pulse.tones.0.detuning', -3, 3),
  range('pulse.tones.0.gdd', -60, 60),
];

export const GOAL: Goal = {
  impurity: 'multiphoton',
  brightness: 'single',
  atLeast: 0.9,
  front: { from: 0.3, to: 0.99, points: 25 },
  third: null,
  limits: [],
};

/** Two-level emitter without filter or laser; the bare instance A of the search benchmarks with its four parameters. */
export function toySpec(
  evaluations: number,
  seed: number,
  parameters: readonly FreeParameter[] = FOUR,
  goal: Partial<Goal> = {},
): ProblemSpec {
  return {
    design: design(twoLevelEmitter(), [TONE, { ...TONE, delay: 5 }]),
    parameters,
    ties: [],
    goal: { ...GOAL, ...goal },
    search: { evaluations, seed, method: 'auto' },
  };
}
