import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Archive, atLevel, dominates, hypervolume, levelsOf, ranksOf } from '../../optimizers/index.js';

const small = fc.integer({ min: 0, max: 8 }).map((n) => n / 8);
const vectors = (count: number) =>
  fc.array(fc.array(small, { minLength: count, maxLength: count }), { maxLength: 40 });
const lists = fc.oneof(vectors(2), vectors(3));

const build = (points: readonly number[][]) => {
  const archive = new Archive<number[]>();
  for (const point of points) archive.add(point, point);
  return archive.entries.map((entry) => entry.objectives);
};

describe('archive', () => {
  it('holds exactly the non-dominated vectors, each once, whatever the order', () => {
    fc.assert(
      fc.property(lists, (points) => {
        const kept = build(points);
        const expected = points.filter((p) => !points.some((q) => dominates(q, p)));
        const distinct = [...new Set(expected.map(String))];
        expect(kept.map(String).sort()).toEqual(distinct.sort());
        expect(build([...points].reverse())).toEqual(kept);
        expect(ranksOf(points)[0]?.map((i) => String(points[i])) ?? []).toEqual(expected.map(String));
      }),
      { seed: 5 },
    );
  });

  it('keeps the preferred one of two with the same objectives, in both orders', () => {
    for (const order of [
      ['b', 'a'],
      ['a', 'b'],
    ]) {
      const archive = new Archive<string>((x, y) => x.localeCompare(y));
      for (const item of order) archive.add([1, 2], item);
      expect(archive.entries.map((entry) => entry.item)).toEqual(['a']);
    }
  });

  it('takes neither NaN nor infinities', () => {
    const archive = new Archive<null>();
    for (const bad of [Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]) {
      expect(archive.add([0, bad], null)).toBe(false);
    }
    expect(archive.entries).toEqual([]);
  });
});

describe('hypervolume', () => {
  it('has the closed forms of one and two boxes', () => {
    expect(hypervolume([[0.25, 0.5]], [1, 1])).toBe(0.375);
    expect(hypervolume([[0.25, 0.5, 0.5]], [1, 1, 1])).toBe(0.1875);
    const two = [
      [0, 0.5, 0.5],
      [0.5, 0, 0],
    ];
    // 1·½·½ + ½·1·1 − ½·½·½
    expect(hypervolume(two, [1, 1, 1])).toBe(0.625);
    expect(hypervolume([], [1, 1])).toBe(0);
    expect(hypervolume([[1, 0]], [1, 1])).toBe(0);
    expect(() => hypervolume([[1, 0, 0, 0]], [1, 1, 1, 1])).toThrow('4 objectives');
  });

  it('is the share of a grid that the points dominate (grid values, so the count is exact)', () => {
    fc.assert(
      fc.property(lists, (points) => {
        const count = points[0]?.length ?? 2;
        const cells = Array.from({ length: 8 ** count }, (_, n) =>
          Array.from({ length: count }, (_, k) => (Math.floor(n / 8 ** k) % 8) / 8),
        );
        const covered = cells.filter((cell) => points.some((p) => p.every((value, k) => value <= cell[k])));
        const reference = new Array<number>(count).fill(1);
        expect(hypervolume(points, reference)).toBeCloseTo(covered.length / cells.length, 12);
      }),
      { seed: 6, numRuns: 60 },
    );
  });
});

describe('front at brightness levels', () => {
  const front = [
    { impurity: 1, brightness: 0.2 },
    { impurity: 2, brightness: 0.5 },
    { impurity: 4, brightness: 0.9 },
  ];

  it('takes the least impurity that is bright enough, and null out of reach', () => {
    expect(atLevel(front, 0.1)).toBe(front[0]);
    expect(atLevel(front, 0.2)).toBe(front[0]);
    expect(atLevel(front, 0.200001)).toBe(front[1]);
    expect(atLevel(front, 0.91)).toBeNull();
    expect(atLevel([], 0)).toBeNull();
  });

  it('spaces levels evenly with exact ends, open ends from the reach of the front', () => {
    expect(levelsOf({ from: 0.3, to: 0.9, points: 4 }, front)).toEqual(
      [0.3, 0.5, 0.7, 0.9].map((x) => expect.closeTo(x, 12)),
    );
    const open = levelsOf({ from: null, to: null, points: 3 }, front);
    expect(open[0]).toBe(0.2);
    expect(open[2]).toBe(0.9);
    expect(levelsOf({ from: null, to: null, points: 3 }, [])).toEqual([]);
    expect(levelsOf({ from: 0.1, to: 0.7, points: 1 }, [])).toEqual([0.7]);
  });
});
