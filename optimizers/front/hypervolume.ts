import { Archive } from './archive.js';

/** Area between a staircase (lexicographic order, non-dominated) and the reference. */
function area(stairs: readonly (readonly number[])[], reference: readonly number[]): number {
  let sum = 0;
  let upper = reference[1];
  for (const [x, y] of stairs) {
    sum += (reference[0] - x) * (upper - y);
    upper = y;
  }
  return sum;
}

/**
 * Exact hypervolume dominated by `points` within `reference` (two or three objectives, all minimised); points that do
 * not dominate the reference do not count. Three objectives: sum of areas over slices of the third one (Fonseca,
 * Paquete & López-Ibáñez, CEC 2006, in its plain form). Throws for other numbers of objectives.
 */
export function hypervolume(points: readonly (readonly number[])[], reference: readonly number[]): number {
  const count = reference.length;
  if (count !== 2 && count !== 3) throw new Error(`hypervolume of ${count} objectives; needs 2 or 3`);
  const inside = points.filter((point) => point.every((value, i) => value < reference[i]));
  const staircase = new Archive<null>();
  const stairs = () => staircase.entries.map((entry) => entry.objectives);
  if (count === 2) {
    for (const point of inside) staircase.add(point, null);
    return area(stairs(), reference);
  }
  const ordered = [...inside].sort((a, b) => a[2] - b[2]);
  let sum = 0;
  ordered.forEach((point, i) => {
    staircase.add(point.slice(0, 2), null);
    const next = i + 1 < ordered.length ? ordered[i + 1][2] : reference[2];
    if (next > point[2]) sum += area(stairs(), reference) * (next - point[2]);
  });
  return sum;
}
