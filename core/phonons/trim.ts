import type { Drive } from '../pulse/drive.js';

const POINTS = 256;

/**
 * The drive without the wings whose area ∫|Ω|dt is below `area` (rad) at either end: an amplitude error of half that, while
 * the bath, at rest before the pulse and solved in closed form after it, loses nothing.
 */
export function trimmed(drive: Drive, area: number): Drive {
  const { breakpoints } = drive;
  const last = breakpoints.length - 2;
  const start = reach(drive, 0, area, 1);
  const end = reach(drive, last, area, -1);
  if (last === 0 && start >= end) return drive;
  const cut = breakpoints.slice();
  cut[0] = start;
  cut[last + 1] = end;
  return { ...drive, breakpoints: cut };
}

/** How far into a segment, from its start (+1) or its end (−1), the drive stays negligible. */
function reach(drive: Drive, segment: number, area: number, direction: 1 | -1): number {
  const a = drive.breakpoints[segment];
  const b = drive.breakpoints[segment + 1];
  const edge = direction > 0 ? a : b;
  const h = (b - a) / POINTS;
  const value = new Float64Array(2 * drive.components);
  let sum = 0;
  for (let k = 1; k < POINTS; k++) {
    drive.sample(edge + direction * k * h, segment, value);
    sum += Math.hypot(...value) * h;
    if (sum > area) return edge + direction * (k - 1) * h;
  }
  return edge;
}
