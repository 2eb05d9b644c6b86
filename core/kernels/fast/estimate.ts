type Values = Readonly<Record<string, number>>;

/** Smallest value at which a relative accuracy is promised. */
const FLOOR = 1e-7;
/** Relative accuracy (1e-6) over absolute accuracy of p_0 and p_1 (1e-9). */
const RELATIVE = 1e-3;
/** No accuracy is promised for p_3; a hundredth of that of p_2 is kept. */
const LOOSE = new Set(['p3']);
const LOOSENESS = 100;
const ABSOLUTE = new Set(['p0', 'p1', 'thinned0', 'thinned1']);
/** Factorial moments beyond the second are wanted only for P(n≥2), in which m_k has the weight (k − 1)/k!. */
const HIGHER = /^m([3-9])$/;

const factorial = (n: number): number => (n < 2 ? 1 : n * factorial(n - 1));

/**
 * Largest difference of two runs: absolute for probabilities of no and one photon, relative/1000 for all else (floored
 * at 1e-7), g⁽²⁾[0] included. A higher moment may differ by what changes P(n≥2), or itself, so much. One thousand times this is the measure of `FigureTree.accuracy`.
 */
export function disagreement(a: Values, b: Values): number {
  let worst = 0;
  const take = (difference: number, scale: number): void => {
    const d = Math.abs(difference) / scale;
    if (!(d <= worst)) worst = d;
  };
  for (const name of Object.keys(b)) {
    const order = Number(HIGHER.exec(name)?.[1] ?? 0);
    if (order > 0) {
      const weight = (order - 1) / factorial(order);
      const multiphoton = b['m2'] / 2 - b['m3'] / 3;
      const scale = Math.max(weight * Math.abs(b[name]), multiphoton, FLOOR);
      take(weight * (a[name] - b[name]), scale / RELATIVE);
      continue;
    }
    const scale = ABSOLUTE.has(name) ? 1 : Math.max(Math.abs(b[name]), FLOOR) / RELATIVE;
    take(a[name] - b[name], LOOSE.has(name) ? LOOSENESS * scale : scale);
  }
  for (const [first, second] of [
    ['mean', 'factorial2'],
    ['m1', 'm2'],
  ]) {
    if (!(b[first] > 0) || !(a[first] > 0) || b[second] === undefined) continue;
    const x = a[second] / a[first] ** 2;
    const y = b[second] / b[first] ** 2;
    take(x - y, Math.max(y, FLOOR) / RELATIVE);
  }
  return worst;
}
