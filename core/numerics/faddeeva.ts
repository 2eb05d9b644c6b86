/**
 * Faddeeva function w(z) = e^{−z²} erfc(−iz) in the upper half plane, with its derivative. Close to the origin by the
 * trapezoidal rule with the pole's contribution taken along (Al Azah & Chandler-Wilde, SIAM J. Numer. Anal. 59, 2346
 * (2021)), farther out by its asymptotic series (Abramowitz & Stegun 7.1.23). Both keep the relative accuracy of the real
 * part where that is small.
 */

/** Nodes of the rule on either side, and their distance. */
const COUNT = 11;
const STEP = Math.sqrt(Math.PI / (COUNT + 1));
const squares = (offset: number): Float64Array =>
  Float64Array.from({ length: COUNT + 1 }, (_, k) => ((k + offset) * STEP) ** 2);
const WHOLE = squares(0);
const HALF = squares(0.5);
const weights = (nodes: Float64Array): Float64Array => nodes.map((square) => Math.exp(-square));
const WHOLE_WEIGHTS = weights(WHOLE).map((w, k) => (k === 0 ? 0.5 * w : w));
const HALF_WEIGHTS = weights(HALF);
/** |z| from which the series is accurate, and its terms. */
const FAR = 8;
const TERMS = 18;

/** Writes Re w, Im w, Re w′, Im w′ at z = x + iy, y ≥ 0. */
export function faddeeva(x: number, y: number, out: Float64Array): void {
  if (!(y >= 0)) throw new RangeError(`Faddeeva function: got an imaginary part of ${y}; needs at least 0`);
  if (x * x + y * y >= FAR * FAR) series(Math.abs(x), y, out);
  else rule(Math.abs(x), y, out);
  // w(−x + iy) is the conjugate of w(x + iy), and its derivative minus the conjugate of w′.
  if (x < 0) {
    out[1] = -out[1];
    out[2] = -out[2];
  }
}

/** w = i/(√π z) Σ (2n−1)!!/(2z²)ⁿ, and its derivative term by term. */
function series(x: number, y: number, out: Float64Array): void {
  const norm = x * x + y * y;
  // u = 1/2z².
  const ur = (x * x - y * y) / (2 * norm * norm);
  const ui = (-2 * x * y) / (2 * norm * norm);
  let [sr, si, dr, di] = [0, 0, 0, 0];
  for (let n = TERMS; n >= 1; n--) {
    // Horner from the innermost: S = 1 + (2n−1)u·S. The derivative of z^{−2n−1} brings −(2n+1).
    const a = (2 * n - 1) * ur;
    const b = (2 * n - 1) * ui;
    [sr, si] = [a * (1 + sr) - b * si, a * si + b * (1 + sr)];
    [dr, di] = [a * (2 * n + 1 + dr) - b * di, a * di + b * (2 * n + 1 + dr)];
  }
  sr += 1;
  dr += 1;
  const scale = 1 / (Math.sqrt(Math.PI) * norm);
  out[0] = scale * (y * sr - x * si);
  out[1] = scale * (x * sr + y * si);
  // −i/(√π z²) · D.
  const cr = -scale * ((2 * x * y) / norm);
  const ci = -scale * ((x * x - y * y) / norm);
  out[2] = cr * dr - ci * di;
  out[3] = cr * di + ci * dr;
}

function rule(x: number, y: number, out: Float64Array): void {
  const part = x / STEP - Math.floor(x / STEP);
  const plain = y >= Math.max(x, Math.PI / STEP);
  const whole = !plain && y < x && part >= 0.25 && part <= 0.75;
  sum(x, y, whole ? WHOLE : HALF, whole ? WHOLE_WEIGHTS : HALF_WEIGHTS, out);
  if (!plain) addPole(x, y, whole ? -1 : 1, out);
  // w′ = −2zw + 2i/√π.
  out[2] = -2 * (x * out[0] - y * out[1]);
  out[3] = -2 * (x * out[1] + y * out[0]) + 2 / Math.sqrt(Math.PI);
}

/** (2ihz/π) Σ e^{−t²}/(z² − t²), with real and imaginary part free of cancellation. */
function sum(x: number, y: number, nodes: Float64Array, factors: Float64Array, out: Float64Array): void {
  const square = x * x + y * y;
  let re = 0;
  let im = 0;
  for (let k = 0; k <= COUNT; k++) {
    const a = x * x - y * y - nodes[k];
    const share = factors[k] / (a * a + 4 * x * x * y * y);
    re += share * (square + nodes[k]);
    im += share * (square - nodes[k]);
  }
  out[0] = ((2 * STEP) / Math.PI) * y * re;
  out[1] = ((2 * STEP) / Math.PI) * x * im;
}

/** 2e^{−z²}/(1 ± e^{−2πiz/h}). */
function addPole(x: number, y: number, sign: 1 | -1, out: Float64Array): void {
  const size = 2 * Math.exp(y * y - x * x);
  const er = size * Math.cos(2 * x * y);
  const ei = -size * Math.sin(2 * x * y);
  const growth = sign * Math.exp((2 * Math.PI * y) / STEP);
  const dr = 1 + growth * Math.cos((2 * Math.PI * x) / STEP);
  const di = -growth * Math.sin((2 * Math.PI * x) / STEP);
  const norm = dr * dr + di * di;
  out[0] += (er * dr + ei * di) / norm;
  out[1] += (ei * dr - er * di) / norm;
}
