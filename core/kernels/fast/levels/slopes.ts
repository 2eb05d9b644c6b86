import type { CountRequest } from '../../count.js';
import type { SparseRows } from '../sparse.js';
import type { Triples } from './correction.js';
import type { Layout } from './layout.js';

/**
 * How the constant part of a layout changes with one number of the filter: central differences of exponentials, corrections
 * and tail functionals, none of which involves a pulse. Their own error is 1e-8 of them.
 */
export interface Slope {
  readonly plus: Layout;
  readonly minus: Layout;
  /** Distance between the two, 1/ps. */
  readonly distance: number;
  /** Of the corrections, per drive component. */
  readonly corrections: readonly (readonly [Triples, Triples] | null)[];
}

/** Relative change of a filter's width, and change of its centre in widths. */
const STEP = 1e-4;

/** Slopes by the width and by the centre of the filter. */
export interface FilterSlopes {
  readonly kappa: Slope;
  readonly center: Slope;
}

const known = new WeakMap<Layout, FilterSlopes>();

/** @param layoutAt the layout of a changed request */
export function filterSlopes(
  request: CountRequest,
  layout: Layout,
  layoutAt: (request: CountRequest) => Layout,
): FilterSlopes | null {
  const { filter } = request;
  if (!filter) return null;
  const found = known.get(layout);
  if (found) return found;
  const d = STEP * filter.kappa;
  const slope = (by: (sign: 1 | -1) => { kappa: number; center: number }): Slope => {
    const [plus, minus] = ([1, -1] as const).map((sign) =>
      layoutAt({ ...request, filter: { ...by(sign), order: filter.order } }),
    );
    const corrections = plus.corrections.map((pair, c) => {
      const other = minus.corrections[c];
      if (!pair || !other) return null;
      return [differ(pair[0], other[0], 2 * d), differ(pair[1], other[1], 2 * d)] as const;
    });
    return { plus, minus, distance: 2 * d, corrections };
  };
  const slopes: FilterSlopes = {
    kappa: slope((sign) => ({ kappa: filter.kappa + sign * d, center: filter.center })),
    center: slope((sign) => ({ kappa: filter.kappa, center: filter.center + sign * d })),
  };
  // Only numbers change, unless a coupling vanishes exactly.
  const { kappa, center } = slopes;
  if (
    [kappa, center].some(({ plus, minus }) => plus.length !== layout.length || minus.length !== layout.length)
  ) {
    return null;
  }
  known.set(layout, slopes);
  return slopes;
}

/** Slope of e^{hK}; null where its series would lose digits. */
export function kickSlope({ plus, minus, distance }: Slope, h: number): Triples | null {
  if (!plus.kick.set(h) || !minus.kick.set(h)) return null;
  return differ(triplesOf(plus.kick.rows as SparseRows), triplesOf(minus.kick.rows as SparseRows), distance);
}

function triplesOf(m: SparseRows): Triples {
  const row = new Int32Array(m.col.length);
  for (let r = 0; r < m.size; r++) row.fill(r, m.start[r], m.start[r + 1]);
  return { row, col: m.col, value: m.value };
}

/** (a − b)/distance; both sorted by row and column. */
function differ(a: Triples, b: Triples, distance: number): Triples {
  const row: number[] = [];
  const col: number[] = [];
  const value: number[] = [];
  const put = (r: number, c: number, v: number): void => {
    if (v === 0) return;
    row.push(r);
    col.push(c);
    value.push(v / distance);
  };
  let i = 0;
  let j = 0;
  while (i < a.value.length || j < b.value.length) {
    const order = compare(a, i, b, j);
    if (order < 0) put(a.row[i], a.col[i], a.value[i++]);
    else if (order > 0) put(b.row[j], b.col[j], -b.value[j++]);
    else put(a.row[i], a.col[i], a.value[i++] - b.value[j++]);
  }
  return { row: Int32Array.from(row), col: Int32Array.from(col), value: Float64Array.from(value) };
}

function compare(a: Triples, i: number, b: Triples, j: number): number {
  if (i >= a.value.length) return 1;
  if (j >= b.value.length) return -1;
  return a.row[i] - b.row[j] || a.col[i] - b.col[j];
}

/** Derivative of e^{hK} between a functional and a state by series of the two exponentials. */
export function onceSlope(
  { plus, minus, distance }: Slope,
  h: number,
  f: Float64Array,
  y: Float64Array,
): number {
  const a = y.slice();
  const b = y.slice();
  plus.kick.once(h, a);
  minus.kick.once(h, b);
  let sum = 0;
  for (let k = 0; k < f.length; k++) sum += f[k] * (a[k] - b[k]);
  return sum / distance;
}
