import type { FreeParameter } from './contract.js';

/** The unit cube that every method works in. */
export interface Space {
  readonly dimension: number;
  /** Per coordinate: 0 = continuous; n > 0 = it indexes a list of n entries by equal bins of [0, 1]. */
  readonly categories: readonly number[];
}

/** How a free parameter fills its coordinate of the unit cube. */
export interface Transform {
  /** From [0, 1] to internal units. */
  readonly value: (unit: number) => number;
  /** From internal units to [0, 1] (the middle of its bin for a list entry). */
  readonly unit: (value: number) => number;
  /** Derivative of `value`; 0 along a list. */
  readonly slope: (unit: number) => number;
  readonly categories: number;
}

const clamp = (x: number, low: number, high: number) => Math.min(Math.max(x, low), high);

/** Index of the bin of `unit` among `count` equal bins of [0, 1]. */
export function binOf(unit: number, count: number): number {
  return clamp(Math.floor(unit * count), 0, count - 1);
}

/** Middle of bin `index` among `count` equal bins of [0, 1]. */
export function binCenter(index: number, count: number): number {
  return (index + 0.5) / count;
}

function through(
  from: number,
  to: number,
  there: (v: number) => number,
  back: (w: number) => number,
  slope: (w: number) => number,
): Transform {
  const low = there(from);
  const span = there(to) - low;
  return {
    // The ends are exact, so that a bound in the study is a bound to the bit.
    value: (u) => (u <= 0 ? from : u >= 1 ? to : clamp(back(low + u * span), from, to)),
    unit: (v) => (span > 0 ? clamp((there(v) - low) / span, 0, 1) : 0),
    slope: (u) => span * slope(low + clamp(u, 0, 1) * span),
    categories: 0,
  };
}

/** Scale of the inverse hyperbolic sine for dispersions: 0.5 ps² (GDD) and 0.5 ps³ (TOD). */
const DISPERSION_SCALE = 0.5;

const lastKey = (path: string) => path.slice(path.lastIndexOf('.') + 1);

/**
 * Logarithm for widths and for `scale: log`, asinh(2·GDD/ps²) for dispersion, linear else. With these variables local
 * methods need an order of magnitude fewer evaluations than with raw ones. Throws on an empty range or list.
 */
export function transformOf(parameter: FreeParameter): Transform {
  if (parameter.kind === 'list') {
    const { path, values } = parameter;
    if (values.length === 0) throw new Error(`${path}: the list of allowed values is empty`);
    return {
      value: (u) => values[binOf(u, values.length)],
      unit: (v) => {
        const index = values.indexOf(v);
        if (index < 0) throw new Error(`${path}: got ${v}; allowed are ${values.join(', ')}`);
        return binCenter(index, values.length);
      },
      slope: () => 0,
      categories: values.length,
    };
  }
  const { path, from, to, scale } = parameter;
  if (!(from <= to)) throw new Error(`${path}: the range from ${from} to ${to} is empty`);
  if (scale === 'log' && !(from > 0))
    throw new Error(`${path}: a logarithmic range must start above 0, got ${from}`);
  const key = lastKey(path);
  if (scale === 'log' || (key === 'fwhm' && from > 0)) return through(from, to, Math.log, Math.exp, Math.exp);
  if (key === 'gdd' || key === 'tod') {
    const there = (v: number) => Math.asinh(v / DISPERSION_SCALE);
    const back = (w: number) => DISPERSION_SCALE * Math.sinh(w);
    return through(from, to, there, back, (w) => DISPERSION_SCALE * Math.cosh(w));
  }
  return through(
    from,
    to,
    (v) => v,
    (w) => w,
    () => 1,
  );
}
