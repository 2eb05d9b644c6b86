import { describe, expect, it } from 'vitest';
import { NODES, PLACES } from '../../../../core/kernels/fast/bloch/nodes.js';
import { ladderOf } from '../../../../core/kernels/fast/levels/ladder.js';
import { LadderStep } from '../../../../core/kernels/fast/levels/ladder-step.js';
import { multiplyThree } from '../../../../core/kernels/fast/levels/unitary-table.js';
import { cascadeEmitter, design, tone } from '../../../support.js';
import { requestOf } from '../fast-designs.js';

const ENERGIES = [0, 1.4, 0.3] as const;
const CHIRP = 0.02;

/** A drive that changes in size and phase, 1/ps. */
const drive = (t: number): [number, number] => {
  const size = 1.1 * Math.exp(-(t * t) / 18);
  return [size * Math.cos(0.4 * t + 0.03 * t * t), size * Math.sin(0.4 * t + 0.03 * t * t)];
};

/** The unitary from −5 to 5 ps in `count` steps. */
function propagate(count: number): { re: Float64Array; im: Float64Array } {
  const h = 10 / count;
  const step = new LadderStep(1, 0.8);
  const all = { re: Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1), im: new Float64Array(9) };
  const nodes = new Float64Array(2 * NODES);
  for (let n = 0; n < count; n++) {
    const middle = -5 + (n + 0.5) * h;
    PLACES.forEach((place, j) => {
      const [x, y] = drive(middle + place * h);
      nodes[2 * j] = 0.5 * h * x;
      nodes[2 * j + 1] = 0.5 * h * y;
    });
    const fall = 2 * CHIRP * h * middle;
    step.set(
      nodes,
      0,
      h * (ENERGIES[0] - ENERGIES[1]) - fall,
      h * (ENERGIES[1] - ENERGIES[2]) - fall,
      2 * CHIRP * h * h,
    );
    multiplyThree(step.re, step.im, 0, all.re, all.im);
  }
  return all;
}

const distance = (
  a: { re: Float64Array; im: Float64Array },
  b: { re: Float64Array; im: Float64Array },
): number => Math.max(...a.re.map((x, k) => Math.hypot(x - b.re[k], a.im[k] - b.im[k])));

describe('unitary steps of a ladder of three levels', () => {
  it('are unitary', () => {
    const { re, im } = propagate(7);
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) {
        let x = 0;
        let y = 0;
        for (let k = 0; k < 3; k++) {
          x += re[3 * i + k] * re[3 * j + k] + im[3 * i + k] * im[3 * j + k];
          y += im[3 * i + k] * re[3 * j + k] - re[3 * i + k] * im[3 * j + k];
        }
        expect(x).toBeCloseTo(i === j ? 1 : 0, 13);
        expect(y).toBeCloseTo(0, 13);
      }
    }
  });

  // Source of the order: Blanes, Casas & Ros, BIT 42, 262 (2002).
  it('converge with order 8', () => {
    const exact = propagate(160);
    const order = Math.log2(distance(propagate(10), exact) / distance(propagate(20), exact));
    expect(order).toBeGreaterThan(7.6);
    expect(order).toBeLessThan(9);
  });

  it('have a short form for a part of a step, good to the fifth power of its length', () => {
    const nodes = Float64Array.from(
      { length: 2 * NODES },
      (_, k) => 0.2 * drive(0.8 * PLACES[k >> 1])[k % 2],
    );
    const turned = (
      parts: readonly (readonly [number, number])[],
    ): { re: Float64Array; im: Float64Array } => {
      const step = new LadderStep(1, 1);
      const all = { re: Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1), im: new Float64Array(9) };
      for (const [from, to] of parts) {
        step.setShort(nodes, 0, -0.5, 0.4, 0.02, from, to);
        multiplyThree(step.re, step.im, 0, all.re, all.im);
      }
      return all;
    };
    const exact = turned(Array.from({ length: 32 }, (_, k) => [-0.5 + k / 32, -0.5 + (k + 1) / 32] as const));
    const whole = distance(turned([[-0.5, 0.5]]), exact);
    const halves = distance(
      turned([
        [-0.5, 0],
        [0, 0.5],
      ]),
      exact,
    );
    expect(whole).toBeLessThan(1e-4);
    expect(Math.log2(whole / halves)).toBeGreaterThan(3.6);
  });
});

describe('ladders', () => {
  it('are found by what a linear polarisation drives, and nowhere else', () => {
    const { scheme } = requestOf(design(cascadeEmitter(), [tone()]));
    expect(ladderOf(scheme, [true, false])).toEqual({ levels: [0, 1, 3], component: 0, lower: 1, upper: 1 });
    expect(ladderOf(scheme, [false, true])).toEqual({ levels: [0, 2, 3], component: 1, lower: 1, upper: 1 });
    expect(ladderOf(scheme, [true, true])).toBeNull();
  });
});
