import { coherencePairs } from '../../../emitter/operators.js';
import { SuperRotation } from '../superrotation.js';
import { applyTransposed, BlockOfThree } from './block-of-three.js';
import type { Component } from './coordinates.js';
import { commute, MATRIX } from './hermitian.js';
import type { Motion } from './motion.js';

/** Applies the motion of one step to every lane's part of the state on one component. */
export interface Rotation {
  set(motion: Motion): void;
  apply(y: Float64Array): void;
  /** The transpose, for functionals of the state. */
  applyTransposed(y: Float64Array): void;
  /**
   * Adds to `torque` (hermitian.ts) what turns a functional's value: with δE the change of the motion's generator over a
   * step, in the picture of its start, the value changes by Tr(torque·δE).
   */
  addTorque(y: Float64Array, functional: Float64Array, torque: Float64Array): void;
}

/**
 * The map of each component; populations of levels that the drive does not touch stand still and have none.
 * @param three levels of which `Motion.three` tells, or null
 */
export function rotationsOf(
  components: readonly Component[],
  levels: number,
  three: readonly number[] | null,
): Rotation[] {
  return components.flatMap((component): Rotation[] => {
    const { coordinates, offsets } = component;
    if (coordinates.length === 1 && coordinates[0] < levels) return [];
    if (three && coordinates.length === 9 && three.every((i, k) => coordinates[k] === i)) {
      return [new ThreeLevelRotation(offsets)];
    }
    return [new OtherRotation(component, levels, three)];
  });
}

class ThreeLevelRotation implements Rotation {
  private readonly block = new BlockOfThree();

  constructor(private readonly offsets: Int32Array) {}

  set(motion: Motion): void {
    const { three } = motion;
    if (three) this.block.set(three.re, three.im);
  }

  apply(y: Float64Array): void {
    this.block.apply(y, this.offsets);
  }

  applyTransposed(y: Float64Array): void {
    applyTransposed(this.block.matrix, y, this.offsets);
  }

  addTorque(y: Float64Array, functional: Float64Array, torque: Float64Array): void {
    const { offsets } = this;
    for (let l = 0; l < offsets.length; l++) {
      pack(y, offsets[l], 1, pair, 0);
      pack(functional, offsets[l], 0.5, pair, MATRIX);
      commute(pair, 0, MATRIX, 2 * MATRIX);
      for (let k = 0; k < MATRIX; k++) torque[k] += pair[2 * MATRIX + k];
    }
  }
}

const pair = new Float64Array(3 * MATRIX);

/** Nine coordinates as a matrix, with a factor for elements off the diagonal. */
function pack(y: Float64Array, o: number, factor: number, out: Float64Array, at: number): void {
  out[at] = y[o] - y[o + 1];
  out[at + 1] = y[o + 1] - y[o + 2];
  out[at + 2] = factor * y[o + 3];
  out[at + 3] = factor * y[o + 4];
  out[at + 4] = factor * y[o + 7];
  out[at + 5] = factor * y[o + 8];
  out[at + 6] = factor * y[o + 5];
  out[at + 7] = factor * y[o + 6];
}

/** Coherences between the levels of a ladder and another level, or among others. */
class OtherRotation implements Rotation {
  private readonly map: SuperRotation;
  private readonly scratch = new Float64Array(64);
  private readonly offsets: Int32Array;
  /** Per level of the ladder: index of Re X_id among the coordinates, and the sign with which Im X_id is kept. */
  private readonly column: readonly { readonly at: number; readonly sign: number }[] | null;

  constructor(component: Component, levels: number, three: readonly number[] | null) {
    this.map = new SuperRotation(levels, component);
    this.offsets = component.offsets;
    this.column = three && columnOf(component.coordinates, levels, three);
  }

  set(motion: Motion): void {
    const { re, im } = motion.full();
    this.map.set(re, im);
  }

  apply(y: Float64Array): void {
    this.map.apply(y, this.scratch);
  }

  applyTransposed(y: Float64Array): void {
    this.map.applyTransposed(y, this.scratch);
  }

  addTorque(y: Float64Array, functional: Float64Array, torque: Float64Array): void {
    const { column, offsets } = this;
    if (!column) return;
    for (let l = 0; l < offsets.length; l++) {
      const o = offsets[l];
      for (let k = 0; k < 3; k++) {
        const { at, sign } = column[k];
        vectors[2 * k] = y[o + at];
        vectors[2 * k + 1] = sign * y[o + at + 1];
        vectors[6 + 2 * k] = functional[o + at];
        vectors[6 + 2 * k + 1] = sign * functional[o + at + 1];
      }
      torque[0] += turning(0, 0, 0) - turning(1, 1, 0);
      torque[1] += turning(1, 1, 0) - turning(2, 2, 0);
      for (const [i, j, k] of ELEMENTS) {
        torque[k] += turning(i, j, 0);
        torque[k + 1] += turning(i, j, 1);
      }
    }
  }
}

const ELEMENTS = [
  [0, 1, 2],
  [1, 2, 4],
  [0, 2, 6],
] as const;
/** Three complex numbers of the state, then of the functional. */
const vectors = new Float64Array(12);

/** Re (part 0) or Im of ½(−i X_i Λ_j* + i Λ_i X_j*). */
function turning(i: number, j: number, part: 0 | 1): number {
  const v = vectors;
  const [xr, xi, lr, li] = [v[2 * i], v[2 * i + 1], v[6 + 2 * j], v[7 + 2 * j]];
  const [mr, mi, yr, yi] = [v[6 + 2 * i], v[7 + 2 * i], v[2 * j], v[2 * j + 1]];
  // X_i Λ_j* and Λ_i X_j*.
  if (part === 0) return 0.5 * (xi * lr - xr * li - (mi * yr - mr * yi));
  return 0.5 * (mr * yr + mi * yi - (xr * lr + xi * li));
}

/** Where the coherences of a ladder with one other level stand, or null when the coordinates are others. */
function columnOf(
  coordinates: readonly number[],
  levels: number,
  three: readonly number[],
): { at: number; sign: number }[] | null {
  const pairs = coherencePairs(levels);
  const found = three.map((i) =>
    coordinates.findIndex((c, k) => {
      if (c < levels || k % 2 !== 0) return false;
      const [a, b] = pairs[(c - levels) >> 1];
      return (a === i && !three.includes(b)) || (b === i && !three.includes(a));
    }),
  );
  if (coordinates.length !== 6 || found.some((at) => at < 0)) return null;
  return found.map((at, k) => {
    const [a] = pairs[(coordinates[at] - levels) >> 1];
    return { at, sign: a === three[k] ? 1 : -1 };
  });
}
