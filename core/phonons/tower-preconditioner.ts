import type { Generator } from '../emitter/generator.js';
import { toDense } from '../emitter/operators.js';
import type { Tower } from './tower.js';

/**
 * Inverse (for row vectors) of decay and rotation of each matrix element of each storey, links and feeding left out. A
 * storey and its mirror image are u = (X₁ − Y₂) + i(X₂ + Y₁) and w = (X₁ + Y₂) + i(Y₁ − X₂), X and Y the halves of the block,
 * 1 and 2 those of the storey; their elements (i, j) and (j, i) are x ± iy of the coordinates x and y.
 */
export class TowerPreconditioner {
  private readonly half: number;
  private readonly size: number;
  private readonly pairs: readonly (readonly [a: number, b: number, decay: number, turn: number])[];

  constructor(
    generator: Generator,
    private readonly tower: Tower,
    private readonly halves: number,
    private readonly damping: number,
    private readonly rotation: number,
  ) {
    const { levels } = generator;
    this.size = levels * levels;
    this.half = this.size * tower.lanes;
    const dense = toDense(generator.constant);
    this.pairs = Array.from({ length: levels + (this.size - levels) / 2 }, (_, i) => {
      const a = i < levels ? i : 2 * i - levels;
      const b = i < levels ? -1 : a + 1;
      return [a, b, -dense[a * this.size + a], b < 0 ? 0 : dense[a * this.size + b]] as const;
    });
  }

  apply(from: Float64Array, to: Float64Array): void {
    to.fill(0);
    for (const { lane, hermitian, decay } of this.tower.storeys) {
      const x1 = lane * this.size;
      const x2 = hermitian ? -1 : x1 + this.size;
      for (const [a, b, rate, turn] of this.pairs) {
        const d = rate + this.damping + decay[0];
        this.mirror(from, to, x1, x2, a, b, d, turn, decay[1], 1);
        this.mirror(from, to, x1, x2, a, b, d, turn, decay[1], -1);
      }
    }
  }

  /** The part of u (sign 1) or w (sign −1) in the result. */
  private mirror(
    from: Float64Array,
    to: Float64Array,
    x1: number,
    x2: number,
    a: number,
    b: number,
    decay: number,
    own: number,
    storey: number,
    sign: number,
  ): void {
    const { half, halves, rotation } = this;
    const y1 = halves > 1 ? half + x1 : -1;
    const y2 = halves > 1 && x2 >= 0 ? half + x2 : -1;
    const re = (c: number): number => from[x1 + c] - (y2 < 0 ? 0 : sign * from[y2 + c]);
    const im = (c: number): number => (x2 < 0 ? 0 : sign * from[x2 + c]) + (y1 < 0 ? 0 : from[y1 + c]);
    const xr = re(a);
    const xi = im(a);
    const yr = b < 0 ? 0 : re(b);
    const yi = b < 0 ? 0 : im(b);
    const turn = rotation + sign * storey;
    const plus = turn + own;
    const minus = turn - own;
    const p = 1 / (decay * decay + plus * plus);
    const m = 1 / (decay * decay + minus * minus);
    // (x ± iy) / (−decay + i·frequency)
    const ur = xr - yi;
    const ui = xi + yr;
    const lr = xr + yi;
    const li = xi - yr;
    const upperRe = p * (-decay * ur + plus * ui);
    const upperIm = p * (-decay * ui - plus * ur);
    const lowerRe = m * (-decay * lr + minus * li);
    const lowerIm = m * (-decay * li - minus * lr);
    const add = (c: number, r: number, i: number): void => {
      to[x1 + c] += r / 2;
      if (x2 >= 0) to[x2 + c] += (sign * i) / 2;
      if (y1 >= 0) to[y1 + c] += i / 2;
      if (y2 >= 0) to[y2 + c] -= (sign * r) / 2;
    };
    add(a, (upperRe + lowerRe) / 2, (upperIm + lowerIm) / 2);
    if (b >= 0) add(b, (upperIm - lowerIm) / 2, (lowerRe - upperRe) / 2);
  }
}
