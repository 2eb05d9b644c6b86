import { describe, expect, it } from 'vitest';
import { type Design, evaluate, evaluateGradient, stream } from '../../../core/index.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../../support.js';

// Exact rows against central differences of `evaluate` itself (common practice, no source), on random designs.

const laser = { repetition: null, piPulse: { energy: 12, fwhm: 5 }, rejection: 1e-6 };
const FIGURES = ['collected.multiphoton', 'signal.single', 'collected.g2'];
const TONE = ['fwhm', 'area', 'detuning', 'gdd'];

/** Steps large against the figures' own error of about 1e-9, small against what the figures do. */
const STEPS: Readonly<Record<string, number>> = {
  fwhm: 0.02,
  area: 0.02,
  detuning: 3e-3,
  gdd: 0.05,
  center: 1,
};

const random = stream(11, 4);
const between = (low: number, high: number) => low + (high - low) * random.next();

function randomDesign(kind: 'emitted' | 'filtered' | 'cascade'): Design {
  const one = tone({
    fwhm: between(2, 9),
    area: (kind === 'cascade' ? 2 : 1) * between(2, 5),
    detuning: between(-0.15, 0.15),
    gdd: between(-6, 6),
  });
  const filter = kind === 'filtered' ? { fwhm: between(20, 100), center: between(-3, 3) } : null;
  const path = {
    line: 'exciton',
    polarization: kind === 'cascade' ? 'h' : 'crossed',
    efficiency: 0.7,
    filter,
  } as const;
  const emitter = kind === 'cascade' ? cascadeEmitter() : twoLevelEmitter({ lifetime: between(100, 600) });
  const reference = kind === 'cascade' ? 'two-photon' : 'exciton';
  return design(emitter, [one], { laser, collection: path, pulse: { reference, tones: [one] } });
}

function moved(base: Design, path: string, by: number): Design {
  const copy = structuredClone(base);
  const keys = path.split('.');
  const last = keys.pop()!;
  const parent = keys.reduce<Record<string, unknown>>(
    (node, key) => node[key] as Record<string, unknown>,
    copy as unknown as Record<string, unknown>,
  );
  parent[last] = (parent[last] as number) + by;
  return copy;
}

const at = (tree: unknown, path: string): number =>
  path.split('.').reduce<unknown>((node, key) => (node as Record<string, unknown>)[key], tree) as number;

describe.each(['emitted', 'filtered', 'cascade'] as const)('exact derivatives, %s', (kind) => {
  it.each([0, 1, 2])('of random design %s', { timeout: 60_000 }, () => {
    const base = randomDesign(kind);
    const tones = TONE.map((key) => `pulse.tones.0.${key}`);
    const parameters =
      kind === 'filtered' ? [...tones, 'collection.filter.fwhm', 'collection.filter.center'] : tones;
    const { figures, rows } = evaluateGradient(base, FIGURES, parameters);
    expect(rows, JSON.stringify(base)).not.toBeNull();
    const plain = evaluate(base, 'search');
    for (const figure of FIGURES)
      expect(Math.abs(at(figures, figure) / at(plain, figure) - 1)).toBeLessThan(1e-6);
    parameters.forEach((path, k) => {
      const h = path === 'collection.filter.fwhm' ? 1 : STEPS[path.slice(path.lastIndexOf('.') + 1)];
      const [p1, m1, p2, m2] = [h, -h, 2 * h, -2 * h].map((by) => evaluate(moved(base, path, by), 'search'));
      FIGURES.forEach((figure, j) => {
        const slope = (8 * (at(p1, figure) - at(m1, figure)) - (at(p2, figure) - at(m2, figure))) / (12 * h);
        const error = Math.abs(rows![j][k] - slope) / (Math.abs(at(figures, figure)) + Math.abs(slope));
        expect(
          error,
          `${figure} by ${path}: ${rows![j][k]} against ${slope}, ${JSON.stringify(base)}`,
        ).toBeLessThan(2e-5);
      });
    });
  });
});

describe('where there are no exact derivatives', () => {
  const rowsOf = (base: Design, figure: string, parameter = 'pulse.tones.0.fwhm') =>
    evaluateGradient(base, [figure], [parameter]).rows;

  it('says so: edges, phonons, quantiles, populations, parameters of the emitter', () => {
    const plain = design(twoLevelEmitter(), [tone({ area: 2 })]);
    expect(rowsOf(plain, 'signal.single')).not.toBeNull();
    expect(rowsOf(design(twoLevelEmitter(), [tone({ shape: 'square' })]), 'signal.single')).toBeNull();
    expect(rowsOf(plain, 'populations.x')).toBeNull();
    expect(rowsOf(plain, 'quantile.signal.single')).toBeNull();
    expect(rowsOf(plain, 'signal.single', 'emitter.lifetime')).toBeNull();
    expect(rowsOf(plain, 'signal.single', 'collection.filter.fwhm')).toBeNull();
    const phonons = { coupling: 0.03, cutoff: 2.2, temperature: 4, method: 'polaron' } as const;
    expect(rowsOf(design(twoLevelEmitter({ phonons }), [tone()]), 'signal.single')).toBeNull();
  });

  it('gives the figures of a search all the same', () => {
    const square = design(twoLevelEmitter(), [tone({ shape: 'square' })]);
    expect(evaluateGradient(square, ['signal.single'], []).figures).toEqual(evaluate(square, 'search'));
  });
});
