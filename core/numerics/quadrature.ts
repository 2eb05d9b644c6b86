/**
 * Abscissae and weights of the 21-point Kronrod extension of the 10-point Gauss rule on [−1, 1].
 * Source: Piessens et al., *QUADPACK* (1983), routine QK21. Odd entries of NODES belong to the Gauss rule.
 */
const NODES = [
  0.9956571630258081, 0.9739065285171717, 0.9301574913557082, 0.8650633666889845, 0.7808177265864169,
  0.6794095682990244, 0.5627571346686047, 0.4333953941292472, 0.2943928627014602, 0.1488743389816312, 0,
];
const KRONROD = [
  0.011694638867371874, 0.032558162307964725, 0.054755896574351995, 0.07503967481091996, 0.0931254545836976,
  0.10938715880229764, 0.12349197626206584, 0.13470921731147334, 0.14277593857706009, 0.14773910490133849,
  0.1494455540029169,
];
const GAUSS = [
  0.06667134430868814, 0.1494513491505806, 0.21908636251598204, 0.26926671930999635, 0.29552422471475287,
];

export interface QuadratureOptions {
  /** Wanted absolute error. */
  readonly absolute?: number;
  /** Wanted error relative to the integral. */
  readonly relative?: number;
  /** Points inside the interval at which the integrand is not smooth, or near which it peaks. */
  readonly breaks?: readonly number[];
  /** Largest number of sub-intervals (default 2000). */
  readonly intervals?: number;
}

export interface QuadratureResult {
  readonly value: number;
  /** Estimated absolute error. */
  readonly error: number;
  /** False when the sub-intervals ran out before the wanted error was reached. */
  readonly converged: boolean;
  /** The sub-intervals of the sum, in no order. */
  readonly pieces: readonly Interval[];
}

export interface Interval {
  readonly a: number;
  readonly b: number;
}

interface Piece extends Interval {
  readonly value: number;
  readonly error: number;
  /** Error that rounding alone leaves. */
  readonly floor: number;
}

function rule(f: (x: number) => number, a: number, b: number): Piece {
  const center = 0.5 * (a + b);
  const half = 0.5 * (b - a);
  const middle = f(center);
  let kronrod = KRONROD[10] * middle;
  let gauss = 0;
  let absolute = KRONROD[10] * Math.abs(middle);
  for (let i = 0; i < 10; i++) {
    const left = f(center - half * NODES[i]);
    const right = f(center + half * NODES[i]);
    kronrod += KRONROD[i] * (left + right);
    absolute += KRONROD[i] * (Math.abs(left) + Math.abs(right));
    if (i % 2 === 1) gauss += GAUSS[(i - 1) / 2] * (left + right);
  }
  const size = Math.abs(half);
  const floor = 50 * Number.EPSILON * absolute * size;
  const difference = Math.abs(kronrod - gauss) * size;
  const scaled =
    absolute > 0 ? absolute * size * Math.min(1, (200 * difference) / (absolute * size)) ** 1.5 : 0;
  return { a, b, value: kronrod * half, error: Math.max(Math.min(scaled, difference), floor), floor };
}

/** Whether bisection can still lower the error of a piece: above rounding, and wide enough to have a middle. */
function divisible(piece: Piece): boolean {
  const center = 0.5 * (piece.a + piece.b);
  return piece.error > piece.floor && center !== piece.a && center !== piece.b;
}

/** Bisects every piece that holds more than its share of the wanted error; false when nothing could be bisected. */
function refine(f: (x: number) => number, pieces: Piece[], target: number, limit: number): boolean {
  const count = pieces.length;
  const share = target / count;
  let changed = false;
  for (let i = 0; i < count && pieces.length < limit; i++) {
    const piece = pieces[i];
    if (piece.error <= share || !divisible(piece)) continue;
    const center = 0.5 * (piece.a + piece.b);
    pieces[i] = rule(f, piece.a, center);
    pieces.push(rule(f, center, piece.b));
    changed = true;
  }
  return changed;
}

/**
 * ∫_a^b f(x) dx by adaptive bisection with the 10–21 point Gauss–Kronrod pair.
 * Rule and error estimate: Piessens et al., *QUADPACK* (1983), QK21.
 */
export function integrate(
  f: (x: number) => number,
  a: number,
  b: number,
  options: QuadratureOptions = {},
): QuadratureResult {
  const { absolute = 0, relative = 1e-10, breaks = [], intervals = 2000 } = options;
  if (!Number.isFinite(a) || !Number.isFinite(b)) {
    throw new RangeError(`quadrature interval: got ${a} to ${b}; needs finite ends`);
  }
  const [low, high] = a <= b ? [a, b] : [b, a];
  const inner = [...new Set(breaks)].filter((x) => x > low && x < high).sort((x, y) => x - y);
  const ends = [low, ...inner, high];
  const pieces: Piece[] = [];
  for (let i = 0; i + 1 < ends.length; i++) pieces.push(rule(f, ends[i], ends[i + 1]));
  for (;;) {
    let value = 0;
    let error = 0;
    for (const piece of pieces) {
      value += piece.value;
      error += piece.error;
    }
    const signed = a <= b ? value : -value;
    const target = Math.max(absolute, relative * Math.abs(value));
    if (error <= target) return { value: signed, error, converged: true, pieces };
    if (!refine(f, pieces, target, intervals)) return { value: signed, error, converged: false, pieces };
  }
}

/**
 * Abscissae and weights of the 21-point rule on each piece: sums of functions that are as smooth as the one for which the
 * pieces were chosen, such as its derivatives by parameters.
 */
export function overPieces(pieces: readonly Interval[], at: (x: number, weight: number) => void): void {
  for (const { a, b } of pieces) {
    const center = 0.5 * (a + b);
    const half = 0.5 * (b - a);
    at(center, KRONROD[10] * half);
    for (let i = 0; i < 10; i++) {
      at(center - half * NODES[i], KRONROD[i] * half);
      at(center + half * NODES[i], KRONROD[i] * half);
    }
  }
}
