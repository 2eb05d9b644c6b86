import type { Drive } from '../../pulse/drive.js';

/** A stretch of the drive window on which the drive is smooth and fades at both ends, or a gap without any drive. */
export interface Span {
  /** ps. */
  readonly start: number;
  readonly end: number;
  /** Segments of the drive: [first, last]. */
  readonly first: number;
  readonly last: number;
  readonly gap: boolean;
}

const before = new Float64Array(4);
const after = new Float64Array(4);

/** Jump of the drive at a breakpoint, relative to its peak, above which the breakpoint is an edge and not a cut tail. */
const EDGE = 1e-8;

/**
 * Joins segments across breakpoints at which a tone merely fades; null when the drive has an edge. On such spans sums
 * over uniform steps converge faster than any power of the step (Trefethen & Weideman, SIAM Rev. 56, 385 (2014)).
 */
export function smoothSpans(drive: Drive): readonly Span[] | null {
  const { breakpoints, components, scales } = drive;
  const count = breakpoints.length - 1;
  const silent = count > 1 ? silentSegments(drive) : null;
  const jump = EDGE * scales.peakRabi;
  const spans: Span[] = [];
  for (let s = 0; s <= count; s++) {
    for (let i = 0; i < 2 * components; i++) {
      before[i] = 0;
      after[i] = 0;
    }
    if (s > 0) drive.sample(breakpoints[s], s - 1, before);
    if (s < count) drive.sample(breakpoints[s], s, after);
    for (let i = 0; i < 2 * components; i++) if (!(Math.abs(after[i] - before[i]) <= jump)) return null;
    if (s === count) break;
    const gap = silent !== null && silent[s] === 1;
    const previous = spans.at(-1);
    if (previous && !gap && !previous.gap) {
      spans[spans.length - 1] = { ...previous, end: breakpoints[s + 1], last: s };
    } else {
      spans.push({ start: breakpoints[s], end: breakpoints[s + 1], first: s, last: s, gap });
    }
  }
  return spans;
}

/** 1 for segments without any drive; a window of one segment has none, which saves bounding its cells. */
function silentSegments(drive: Drive): Uint8Array {
  const silent = new Uint8Array(drive.breakpoints.length - 1).fill(1);
  for (const cell of drive.cells) if (cell.bound > 0) silent[cell.segment] = 0;
  return silent;
}
