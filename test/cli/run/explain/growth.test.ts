import { describe, expect, it } from 'vitest';
import { growthOf } from '../../../../cli/run/explain/growth.js';

const stages = (...pairs: readonly (readonly [number, number])[]) =>
  pairs.map(([evaluations, hypervolume], i) => ({ name: `s-${i}`, tasks: 1, evaluations, hypervolume }));

describe('growth of the hypervolume', () => {
  it('estimates twice the budget from the last two doublings', () => {
    // Arithmetic by hand: 4 at a quarter, 8 at half, 10 at the end.
    const growth = growthOf(stages([100, 4], [100, 8], [100, 9], [100, 10]));
    expect(growth?.lastHalf).toBeCloseTo(0.2, 12);
    expect(growth?.quarterBefore).toBeCloseTo(0.4, 12);
    expect(growth?.byDoubling?.least).toBeCloseTo(0.1, 12);
    expect(growth?.byDoubling?.most).toBeCloseTo(0.2, 12);
  });

  it('does not promise less than the last half where growth does not slow down', () => {
    const growth = growthOf(stages([100, 4], [100, 5], [100, 7], [100, 10]));
    expect(growth?.byDoubling).toEqual({ least: 0.5, most: 0.5 });
  });

  it('makes no estimate from a half without anything', () => {
    const growth = growthOf(stages([100, 0], [100, 0], [100, 7], [100, 10]));
    expect(growth).toEqual({ lastHalf: 1, quarterBefore: 0, byDoubling: null });
  });

  it('counts a stage when it is over', () => {
    const growth = growthOf(stages([10, 6], [50, 8], [300, 9], [40, 10]));
    expect(growth?.lastHalf).toBeCloseTo(0.2, 12);
    expect(growth?.quarterBefore).toBeCloseTo(0, 12);
  });

  it('tells no trend from few stages, or where nothing was found', () => {
    expect(growthOf(stages([100, 4], [100, 8], [100, 9]))).toBeNull();
    expect(growthOf(stages([100, 0], [100, 0], [100, 0], [100, 0]))).toBeNull();
  });
});
