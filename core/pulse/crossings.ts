/** A piece of an axis on which a non-negative function is continuous; its ends are one-sided values. */
export interface Cell {
  readonly from: number;
  readonly to: number;
  /** Sampling step: no feature of the function is narrower than a few of these. */
  readonly step: number;
  /** The function does not exceed this inside. */
  readonly bound: number;
  readonly value: (x: number) => number;
}

interface Point {
  readonly x: number;
  readonly y: number;
}

const GOLDEN = 0.5 * (Math.sqrt(5) - 1);

function samplesOf(cell: Cell): Point[] {
  const count = Math.max(4, Math.ceil((cell.to - cell.from) / cell.step));
  return Array.from({ length: count + 1 }, (_, i) => {
    const x = i === count ? cell.to : cell.from + ((cell.to - cell.from) * i) / count;
    return { x, y: cell.value(x) };
  });
}

/** Highest point between the neighbours of sample i, by golden-section search. */
function crest(cell: Cell, samples: readonly Point[], i: number): Point {
  let a = samples[Math.max(0, i - 1)].x;
  let b = samples[Math.min(samples.length - 1, i + 1)].x;
  let best = samples[i];
  const probe = (x: number) => {
    const y = cell.value(x);
    if (y > best.y) best = { x, y };
    return y;
  };
  let c = b - GOLDEN * (b - a);
  let d = a + GOLDEN * (b - a);
  let [yc, yd] = [probe(c), probe(d)];
  // The height of a crest is known to rounding when its place is known to 1e-8 of the bracket.
  for (let k = 0; k < 40; k++) {
    if (yc > yd) {
      [b, d, yd] = [d, c, yc];
      c = b - GOLDEN * (b - a);
      yc = probe(c);
    } else {
      [a, c, yc] = [c, d, yd];
      d = a + GOLDEN * (b - a);
      yd = probe(d);
    }
  }
  return best;
}

function isCrest(samples: readonly Point[], i: number): boolean {
  const { y } = samples[i];
  return (i === 0 || samples[i - 1].y <= y) && (i + 1 === samples.length || samples[i + 1].y <= y);
}

/** Highest point of all cells; those whose bound cannot beat what is known already are never sampled. */
function highest(cells: readonly Cell[]): Point {
  let best = { x: Number.NaN, y: 0 };
  for (const cell of [...cells].sort((a, b) => b.bound - a.bound)) {
    if (cell.bound <= best.y) break;
    const samples = samplesOf(cell);
    const top = samples.reduce((largest, { y }) => Math.max(largest, y), best.y);
    for (let i = 0; i < samples.length; i++) {
      if (!(samples[i].y > 0.9 * top && isCrest(samples, i))) continue;
      const found = crest(cell, samples, i);
      if (found.y > best.y) best = found;
    }
  }
  return best;
}

/** Place between low (value below the level) and high (not below it) where the level is crossed, by bisection. */
function root(value: (x: number) => number, low: number, high: number, level: number): number {
  let [a, b] = [low, high];
  for (let i = 0; i < 80; i++) {
    const middle = 0.5 * (a + b);
    if (middle === a || middle === b) break;
    if (value(middle) < level) a = middle;
    else b = middle;
  }
  return b;
}

/** First place, from one side, at which the function reaches the level. */
function outermost(cells: readonly Cell[], level: number, fromRight: boolean): number {
  for (const cell of fromRight ? [...cells].reverse() : cells) {
    if (cell.bound < level) continue;
    const samples = samplesOf(cell);
    if (fromRight) samples.reverse();
    for (let i = 0; i < samples.length; i++) {
      let inside = samples[i];
      // A crest that the samples just miss may still reach the level.
      if (inside.y < level && inside.y > 0.9 * level && isCrest(samples, i)) inside = crest(cell, samples, i);
      if (inside.y < level) continue;
      return i === 0 ? inside.x : root(cell.value, samples[i - 1].x, inside.x, level);
    }
  }
  throw new Error(`no cell reaches ${level}, half of the maximum of the same cells`);
}

/** Where a function is highest, how high, and the outermost points at which it reaches half of that; NaN where it is 0. */
export interface HalfMaximum {
  readonly top: number;
  readonly at: number;
  readonly left: number;
  readonly right: number;
}

/** Half maximum of a function given on ascending adjacent cells; jumps between cells count as crossings. */
export function halfMaximum(cells: readonly Cell[]): HalfMaximum {
  const { x: at, y: top } = highest(cells);
  if (!(top > 0)) return { top: 0, at: Number.NaN, left: Number.NaN, right: Number.NaN };
  return {
    top,
    at,
    left: outermost(cells, 0.5 * top, false),
    right: outermost(cells, 0.5 * top, true),
  };
}

/** Distance between the crossings; 0 for a function that is zero everywhere. */
export const halfMaximumWidth = ({ top, left, right }: HalfMaximum): number => (top > 0 ? right - left : 0);
