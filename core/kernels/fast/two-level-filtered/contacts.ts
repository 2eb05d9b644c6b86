/** Complex number. */
export interface Complex {
  readonly re: number;
  readonly im: number;
}

/**
 * What a sum over grid points leaves out at its end: β_j = ∫₀^∞ τ^j/j! e^{−ντ}dτ − h·Σ' (kh)^j/j! e^{−νkh}, the primed sum
 * with half its first term (the Euler–Maclaurin remainder, summed up in closed form).
 */
export interface Remainders {
  readonly b0: Complex;
  readonly b1: Complex;
  readonly b2: Complex;
  readonly b3: Complex;
}

/** |νh/2| below which the closed forms cancel; the series hold to 1e-16 of h. */
const SMALL = 0.2;

/** @param nu 1/ps, @param h ps */
export function remainders(nu: Complex, h: number): Remainders {
  const x = { re: 0.5 * h * nu.re, im: 0.5 * h * nu.im };
  return Math.hypot(x.re, x.im) < SMALL ? bySeries(x, h) : byClosedForm(x, h);
}

/** Coefficients in x² of coth x − 1/x over x, of 1/x² − 1/sinh²x, and of (1/x³ − cosh x/sinh³x) over x. */
const COTH = [1 / 3, -1 / 45, 2 / 945, -1 / 4725, 2 / 93555, -1382 / 638512875];
const SINH = [1 / 3, -1 / 15, 2 / 189, -1 / 675, 2 / 10395, -1382 / 58046625];
const CUBE = [1 / 15, -4 / 189, 1 / 225, -8 / 10395, 1382 / 11609325];
/** The same of (2 sinh²x + 3)/sinh⁴x − 3/x⁴. */
const FOURTH = CUBE.map((a, k) => (2 * k + 1) * a);

function bySeries(x: Complex, h: number): Remainders {
  const square = multiply(x, x);
  const p0 = multiply(x, polynomial(COTH, square));
  const p1 = polynomial(SINH, square);
  const p2 = multiply(x, polynomial(CUBE, square));
  const p3 = polynomial(FOURTH, square);
  return {
    b0: scale(p0, -h / 2),
    b1: scale(p1, h ** 2 / 4),
    b2: scale(p2, h ** 3 / 8),
    b3: scale(p3, -(h ** 4) / 48),
  };
}

function byClosedForm(x: Complex, h: number): Remainders {
  const up = exponential(x);
  const down = exponential(scale(x, -1));
  const sinh = scale(add(up, scale(down, -1)), 0.5);
  const cosh = scale(add(up, down), 0.5);
  const one = { re: 1, im: 0 };
  const sinh2 = multiply(sinh, sinh);
  const square = multiply(x, x);
  const b0 = add(divide(one, x), scale(divide(cosh, sinh), -1));
  const b1 = add(divide(one, square), scale(divide(one, sinh2), -1));
  const b2 = add(divide(one, multiply(square, x)), scale(divide(cosh, multiply(sinh2, sinh)), -1));
  const b3 = add(
    divide({ re: 3, im: 0 }, multiply(square, square)),
    scale(divide(add(scale(sinh2, 2), { re: 3, im: 0 }), multiply(sinh2, sinh2)), -1),
  );
  return {
    b0: scale(b0, h / 2),
    b1: scale(b1, h ** 2 / 4),
    b2: scale(b2, h ** 3 / 8),
    b3: scale(b3, h ** 4 / 48),
  };
}

function polynomial(coefficients: readonly number[], x: Complex): Complex {
  let sum = { re: 0, im: 0 };
  for (let k = coefficients.length - 1; k >= 0; k--) {
    const p = multiply(sum, x);
    sum = { re: p.re + coefficients[k], im: p.im };
  }
  return sum;
}

export const add = (a: Complex, b: Complex): Complex => ({ re: a.re + b.re, im: a.im + b.im });
export const scale = (a: Complex, k: number): Complex => ({ re: a.re * k, im: a.im * k });
export const multiply = (a: Complex, b: Complex): Complex => ({
  re: a.re * b.re - a.im * b.im,
  im: a.re * b.im + a.im * b.re,
});
export const exponential = (a: Complex): Complex => {
  const e = Math.exp(a.re);
  return { re: e * Math.cos(a.im), im: e * Math.sin(a.im) };
};
export function divide(a: Complex, b: Complex): Complex {
  const norm = b.re * b.re + b.im * b.im;
  return { re: (a.re * b.re + a.im * b.im) / norm, im: (a.im * b.re - a.re * b.im) / norm };
}
