import { describe, expect, it } from 'vitest';
import type { EvaluateGradient } from '../../core/gradient.js';
import type { Design } from '../../core/index.js';
import { stream } from '../../core/numerics/stream.js';
import { createProblem, figureOf, type ProblemSpec } from '../../optimizers/index.js';
import { FOUR, range, toyEvaluate, toySpec } from './toy.js';

// The chain rule from figures by design parameters to the variables of the cube (our own contract, no source), held to
// central differences of the whole.

type Node = Record<string, unknown>;

/** A copy of a design with the number at a path moved. */
function moved(design: Design, path: string, by: number): Design {
  const copy = structuredClone(design);
  const keys = path.split('.');
  const parent = keys.slice(0, -1).reduce((node, key) => node[key] as Node, copy as unknown as Node);
  const last = keys[keys.length - 1];
  parent[last] = (parent[last] as number) + by;
  return copy;
}

/** Derivatives of the stand-in by central differences in the design's own parameters. */
const toyGradient: EvaluateGradient = (design, figures, parameters) => {
  const step = 1e-5;
  const sides = parameters.map((path) => [-step, step].map((by) => toyEvaluate(moved(design, path, by))));
  const rows = figures.map((figure) =>
    sides.map(
      ([low, high]) =>
        ((figureOf(high, figure) ?? Number.NaN) - (figureOf(low, figure) ?? Number.NaN)) / (2 * step),
    ),
  );
  return { figures: toyEvaluate(design), rows };
};

const limits = [
  { figure: 'pulse.duration_ps', atMost: 20, atLeast: 3 },
  { figure: 'signal.mean', atMost: null, atLeast: 0.4 },
];

function expectChain(spec: ProblemSpec): void {
  const problem = createProblem(spec, toyEvaluate, toyGradient);
  const random = stream(8, 0);
  for (let round = 0; round < 20; round++) {
    const x = Array.from({ length: problem.space.dimension }, () => 0.1 + 0.8 * random.next());
    const gradients = problem.differentiate?.(x).gradients ?? [];
    const numbersAt = (at: readonly number[]) => {
      const { impurity, brightness, constraints } = problem.evaluate(at);
      return [impurity, brightness, ...constraints];
    };
    expect(gradients).toHaveLength(numbersAt(x).length);
    x.forEach((u, k) => {
      const [low, high] = [-1e-5, 1e-5].map((by) => numbersAt(x.map((v, i) => (i === k ? u + by : v))));
      gradients.forEach((row, r) => {
        const largest = Math.max(1e-6, ...row.map(Math.abs));
        const expected = problem.space.categories[k] > 0 ? 0 : (high[r] - low[r]) / 2e-5;
        expect(Math.abs(row[k] - expected) / largest).toBeLessThan(1e-4);
      });
    });
  }
}

describe('exact derivatives in the variables of the cube', () => {
  it('go through logarithm, asinh and linear variables, and through limits', () => {
    expectChain(toySpec(1, 1, FOUR, { limits }));
  });

  it('add up what is tied, also along a chain of ties', () => {
    const tied = {
      ...toySpec(1, 1, [range('pulse.tones.1.fwhm', 1, 30), range('pulse.tones.0.area', 1, 6)], { limits }),
      ties: [
        { path: 'pulse.tones.0.gdd', sameAs: 'pulse.tones.0.fwhm' },
        { path: 'pulse.tones.0.fwhm', sameAs: 'pulse.tones.1.fwhm' },
      ],
    };
    expectChain(tied);
  });

  it('are zero along a list', () => {
    const list = { kind: 'list', path: 'pulse.tones.0.gdd', values: [-20, 0, 10, 25] } as const;
    expectChain(toySpec(1, 1, [...FOUR.slice(0, 3), list]));
  });

  it('are not given where the figures have none, or the design is infeasible', () => {
    const x = [0.2, 0.3, 0.5, 0.5];
    const without: EvaluateGradient = (design) => ({ figures: toyEvaluate(design), rows: null });
    expect(createProblem(toySpec(1, 1), toyEvaluate, without).differentiate?.(x).gradients).toBeNull();
    const flawed: EvaluateGradient = (design, figures, parameters) => {
      const answer = toyGradient(design, figures, parameters);
      return {
        ...answer,
        figures: { ...answer.figures, phonons: { method: 'polaron', flags: ['unphysical'] } },
      };
    };
    expect(createProblem(toySpec(1, 1), toyEvaluate, flawed).differentiate?.(x).gradients).toBeNull();
    expect(createProblem(toySpec(1, 1), toyEvaluate).differentiate).toBeNull();
  });
});
