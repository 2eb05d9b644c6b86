import { SuperRotation } from '../superrotation.js';
import { BlockOfThree } from './block-of-three.js';
import type { Component } from './coordinates.js';
import type { Motion } from './motion.js';

/** Applies the motion of one step to every lane's part of the state on one component. */
export interface Rotation {
  set(motion: Motion): void;
  apply(y: Float64Array): void;
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
    return [new OtherRotation(component, levels)];
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
}

class OtherRotation implements Rotation {
  private readonly map: SuperRotation;
  private readonly scratch = new Float64Array(64);

  constructor(component: Component, levels: number) {
    this.map = new SuperRotation(levels, component);
  }

  set(motion: Motion): void {
    const { re, im } = motion.full();
    this.map.set(re, im);
  }

  apply(y: Float64Array): void {
    this.map.apply(y, this.scratch);
  }
}
