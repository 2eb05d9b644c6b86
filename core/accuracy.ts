import type { FigureTree } from './figures.js';
import type { DriftTree } from './tree.js';

/** Smallest value at which a relative accuracy is promised. */
const FLOOR = 1e-7;
/** p_0 and p_1 are promised to 1e-9 absolute where others are promised to 1e-6 relative. */
const PROBABILITY_SCALE = 1000;

/** Largest difference between two evaluations of a design, in the measure of `FigureTree.accuracy.error_estimate`. */
export function figureDifference(a: FigureTree, b: FigureTree): number {
  let worst = 0;
  const relative = (x: number | null, y: number | null): void => {
    if (x === null || y === null) return;
    worst = Math.max(worst, Math.abs(x - y) / Math.max(Math.abs(y), FLOOR));
  };
  const absolute = (x: number, y: number): void => {
    worst = Math.max(worst, PROBABILITY_SCALE * Math.abs(x - y));
  };
  absolute(a.emitted.p[0], b.emitted.p[0]);
  absolute(a.emitted.p[1], b.emitted.p[1]);
  relative(a.emitted.p[2], b.emitted.p[2]);
  relative(a.emitted.p[3], b.emitted.p[3]);
  if (a.filtered?.p && b.filtered?.p) {
    absolute(a.filtered.p[0], b.filtered.p[0]);
    absolute(a.filtered.p[1], b.filtered.p[1]);
  }
  for (const basis of ['emitted', 'filtered', 'signal', 'collected'] as const) {
    const x = a[basis];
    const y = b[basis];
    if (!x || !y) continue;
    relative(x.mean, y.mean);
    relative(x.g2, y.g2);
    relative(x.multiphoton, y.multiphoton);
  }
  return worst;
}

/** Largest relative difference of what is emitted, of the signal and of what is collected, quantiles included. */
export function relativeDifference(a: DriftTree, b: DriftTree): number {
  const parts = (tree: DriftTree): object[] => [
    tree.emitted,
    tree.signal,
    tree.collected,
    ...(tree.quantile ? [tree.quantile.signal, tree.quantile.collected] : []),
  ];
  const others = parts(a);
  let worst = 0;
  parts(b).forEach((part, i) => {
    const other: Readonly<Record<string, unknown>> = { ...others[i] };
    for (const [name, y] of Object.entries(part)) {
      const x = other[name];
      if (typeof x !== 'number' || typeof y !== 'number') continue;
      worst = Math.max(worst, Math.abs(x - y) / Math.max(Math.abs(y), FLOOR));
    }
  });
  return worst;
}
