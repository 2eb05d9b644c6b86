import type { Figures } from '../core/index.js';
import type { Evaluate, FreeParameter, ProblemSpec, Reply, Trial } from '../optimizers/index.js';
import { design, tone, twoLevelEmitter } from '../test/support.js';

/** Numbers of a tone that fill their coordinate of the cube evenly. */
const FIELDS = ['area', 'detuning', 'delay', 'phase', 'polarization'] as const;

/** Added to what is maximised, so that it is positive as a brightness must be. */
const OFFSET = 1e4;

/**
 * A function of the unit cube dressed as a study, so that the default strategy can search it: the coordinates stand
 * where a design has numbers, the first objective (shifted to be positive) as brightness, the second as g⁽²⁾, a third
 * one as pulse energy, and each constraint c ≤ 0 as the limit 1 + c ≤ 1.
 */
export function asStudy(
  problem: {
    readonly evaluate: (x: Trial) => Reply;
    readonly dimension: number;
    readonly constraints: number;
  },
  objectives: number,
  evaluations: number,
  seed: number,
): {
  readonly spec: ProblemSpec;
  readonly evaluate: Evaluate;
  readonly objectivesOf: (figures: Figures) => number[];
} {
  const { dimension, constraints } = problem;
  const tones = Array.from({ length: Math.ceil(dimension / FIELDS.length) }, () => tone({ area: 0 }));
  const places = Array.from({ length: dimension }, (_, k) => ({
    tone: Math.floor(k / FIELDS.length),
    field: FIELDS[k % FIELDS.length],
  }));
  const parameters = places.map(
    (at): FreeParameter => ({
      kind: 'range',
      path: `pulse.tones.${at.tone}.${at.field}`,
      from: 0,
      to: 1,
      scale: 'linear',
    }),
  );
  const evaluate: Evaluate = ({ pulse }) => {
    const reply = problem.evaluate(places.map((at) => pulse.tones[at.tone][at.field]));
    const [first, second, third = 0] = reply.objectives;
    const counts = { mean: OFFSET - first, single: null, any: null, multiphoton: null, g2: second };
    return {
      emitted: { mean: 0, factorial2: 0, g2: null, p: [], multiphoton: 0 },
      filtered: null,
      signal: counts,
      collected: { ...counts, leakage: 0 },
      populations: Object.fromEntries(reply.constraints.map((c, i) => [`c${i}`, 1 + c])),
      pulse: { energy_pi_units: 0, energy_fj: third, duration_ps: 0, bandwidth_ghz: 0, peak_rabi_per_ps: 0 },
      phonons: { method: 'none', flags: [] },
      accuracy: { steps: 0, error_estimate: 0 },
      notes: [],
      nominal: null,
      quantile: null,
    };
  };
  const spec: ProblemSpec = {
    design: design(twoLevelEmitter(), tones),
    parameters,
    ties: [],
    goal: {
      impurity: 'g2',
      brightness: 'mean',
      atLeast: null,
      front: { from: null, to: null, points: 100 },
      third: objectives === 3 ? { axis: 'energy', slices: 8 } : null,
      limits: Array.from({ length: constraints }, (_, i) => ({
        figure: `populations.c${i}`,
        atMost: 1,
        atLeast: null,
      })),
    },
    search: { evaluations, seed, method: 'auto' },
  };
  const objectivesOf = ({ signal, collected, pulse }: Figures) =>
    [OFFSET - signal.mean, collected.g2 ?? Number.NaN, pulse.energy_fj ?? Number.NaN].slice(0, objectives);
  return { spec, evaluate, objectivesOf };
}
