import type { Drive } from '../pulse/drive.js';

/** An interval of the dressed window on which everything is smooth. */
export interface MemorySegment {
  readonly start: number;
  readonly end: number;
  /** Segment of the drive that acts; −1: the drive is over. */
  readonly source: number;
  /** The bath itself is out of balance here (after a hard edge or a sudden end): its own time scale must be resolved. */
  readonly transient: boolean;
}

/** Jump of the drive, relative to its peak, that counts as a hard edge. */
const HARD = 1e-6;

/**
 * The drive's segments, with the time after each hard edge and after the end of the drive set apart.
 * @param settling how long the bath's own motion has to be followed after a hard edge, ps
 * @param afterglow how long the emitter is followed after the drive, ps
 */
export function memorySegments(drive: Drive, settling: number, afterglow: number): MemorySegment[] {
  const { breakpoints, scales } = drive;
  const count = breakpoints.length - 1;
  const out: MemorySegment[] = [];
  const before = new Float64Array(2 * drive.components);
  const after = new Float64Array(2 * drive.components);
  const cut = (start: number, end: number, source: number, time: number): void => {
    const middle = Math.min(start + time, end);
    if (middle > start) out.push({ start, end: middle, source, transient: true });
    if (end > middle) out.push({ start: middle, end, source, transient: false });
  };
  for (let s = 0; s < count; s++) {
    const t = breakpoints[s];
    if (s > 0) drive.sample(t, s - 1, before);
    drive.sample(t, s, after);
    const jump = after.reduce((m, x, k) => Math.max(m, Math.abs(x - before[k])), 0);
    const silent = isSilent(drive, s);
    const hard = jump > HARD * scales.peakRabi;
    cut(t, breakpoints[s + 1], s, silent ? Math.max(afterglow, hard ? settling : 0) : hard ? settling : 0);
  }
  if (afterglow > 0) {
    const end = breakpoints[count];
    out.push({ start: end, end: end + afterglow, source: -1, transient: true });
  }
  return out;
}

function isSilent(drive: Drive, segment: number): boolean {
  const value = new Float64Array(2 * drive.components);
  const a = drive.breakpoints[segment];
  const b = drive.breakpoints[segment + 1];
  for (let k = 0; k <= 8; k++) {
    drive.sample(a + ((b - a) * k) / 8, segment, value);
    if (value.some((x) => x !== 0)) return false;
  }
  return true;
}
