import type { Stream } from '../../core/numerics/stream.js';
import type { Trial } from '../local/contract.js';
import { binCenter, type Space } from '../problem/space.js';

/** Spread of a bounded SBX child towards the bound that is `room` parent distances away. */
function spread(u: number, room: number, eta: number): number {
  const alpha = 2 - (1 + 2 * room) ** -(eta + 1);
  return u <= 1 / alpha ? (u * alpha) ** (1 / (eta + 1)) : (1 / (2 - u * alpha)) ** (1 / (eta + 1));
}

/**
 * Simulated binary crossover within [0, 1] (Deb & Agrawal, Complex Systems 9, 115 (1995); bounded form of Deb's
 * NSGA-II). A list coordinate is exchanged whole, with probability one half.
 */
export function crossover(
  a: Trial,
  b: Trial,
  space: Space,
  eta: number,
  random: Stream,
): [number[], number[]] {
  const first = [...a];
  const second = [...b];
  for (let k = 0; k < a.length; k++) {
    if (random.next() >= 0.5) continue;
    if (space.categories[k] > 0) {
      first[k] = b[k];
      second[k] = a[k];
      continue;
    }
    const low = Math.min(a[k], b[k]);
    const high = Math.max(a[k], b[k]);
    const gap = high - low;
    if (gap < 1e-14) continue;
    const u = random.next();
    const down = 0.5 * (low + high - spread(u, low / gap, eta) * gap);
    const up = 0.5 * (low + high + spread(u, (1 - high) / gap, eta) * gap);
    const [c, d] = [down, up].map((value) => Math.min(Math.max(value, 0), 1));
    const swap = random.next() < 0.5;
    first[k] = swap ? d : c;
    second[k] = swap ? c : d;
  }
  return [first, second];
}

/**
 * Polynomial mutation within [0, 1] (Deb & Goyal, Comput. Sci. Informatics 26, 30 (1996)), each coordinate with
 * probability `rate`. A list coordinate is drawn anew.
 */
export function mutate(x: Trial, space: Space, eta: number, rate: number, random: Stream): number[] {
  return x.map((own, k) => {
    if (random.next() >= rate) return own;
    const count = space.categories[k];
    if (count > 0) return binCenter(random.int(count), count);
    const u = random.next();
    const power = 1 / (eta + 1);
    const shift =
      u < 0.5
        ? (2 * u + (1 - 2 * u) * (1 - own) ** (eta + 1)) ** power - 1
        : 1 - (2 * (1 - u) + (2 * u - 1) * own ** (eta + 1)) ** power;
    return Math.min(Math.max(own + shift, 0), 1);
  });
}
