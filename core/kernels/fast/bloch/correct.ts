import type { Chain, Correction, Kick } from './chain.js';
import { STRIDE } from './pace.js';

/**
 * `kicks` (chain.ts) with the second-order errors of the splitting that differ from lane to lane taken out in the middle of
 * every second kick, twice as much at once: of 1e-6 at most, they need not be exact. With Z
 * the feeding of lanes by jumps (dρ_gg/dt = γZρ_xx), δ = γ-dephasing over γ, P = (1 + Z)/2, M = Z − 1, e the inversion's axis
 * and b = B × e the transverse drive, the kicks' error per unit time is cancelled by
 *   (b∧e)[(h²γ²/48)δZ − (h⁴γ²Ω²/5760)(3Z² − 8δZ)] on the Bloch vectors,
 *   b·[−(h²γγ*·1/48)P + (h⁴γ²Ω²/1920)(Z − δ)P] from the traces to them, and
 *   bᵀ·[−(h²γγ*·1/24)M + (h⁴γ²Ω²/960)M(Z − δ)] back:
 * (h²/24)[[K,V],K] − (h⁴/1440)[[K,V], [[K,V],V] + [K,V̇]] of the Euler–Maclaurin series of the double sum over kicks,
 * without the parts common to all lanes, which scale the rotation.
 */
export function correctedKicks(
  chain: Chain,
  kick: Kick,
  middle: Kick,
  correction: Correction,
  axes: Float64Array,
  pulls: Float64Array,
  from: number,
  to: number,
): void {
  const { own, feed, rest, state } = chain;
  const { quadratic, quartic, ratio } = correction;
  const stay = 0.25 * (1 + own) * kick.loss;
  const fade = kick.fade;
  const mine = 1 - fade - 2 * stay;
  const fall = (1 - own) * kick.loss;
  const handed = feed * kick.loss;
  const last = rest * kick.loss;
  const stayM = 0.25 * (1 + own) * middle.loss;
  const fadeM = middle.fade;
  const mineM = 1 - fadeM - 2 * stayM;
  const fallM = (1 - own) * middle.loss;
  const handedM = feed * middle.loss;
  const lastM = rest * middle.loss;
  let x = state[0];
  let y = state[1];
  let z = state[2];
  let t = state[3];
  let x1 = state[4];
  let y1 = state[5];
  let z1 = state[6];
  let t1 = state[7];
  let more = state[8];
  for (let n = from, k = 3 * from, m = 4 * from; n < to; n += STRIDE, k += 3 * STRIDE, m += 4 * STRIDE) {
    let a = axes[k];
    let b = axes[k + 1];
    let c = axes[k + 2];
    const u = pulls[m];
    const v = pulls[m + 1];
    const w = pulls[m + 2];
    const beta = quartic * pulls[m + 3];
    const base = quadratic - beta * ratio;
    const linear = (8 / 3) * beta * ratio - quadratic;
    for (let part = 0; part < 2; part++) {
      const p = a * x + b * y + c * z;
      const p1 = a * x1 + b * y1 + c * z1;
      const e = 0.5 * t - p;
      const e1 = 0.5 * t1 - p1;
      const d = mineM * p + stayM * t;
      const d1 = mineM * p1 + (stayM * t1 + 0.5 * handedM * e);
      x = fadeM * x + a * d;
      y = fadeM * y + b * d;
      z = fadeM * z + c * d;
      x1 = fadeM * x1 + a * d1;
      y1 = fadeM * y1 + b * d1;
      z1 = fadeM * z1 + c * d1;
      t -= fallM * e;
      t1 += handedM * e - fallM * e1;
      more += lastM * e1;
      if (part === 1) break;
      const g = u * x + v * y + w * z;
      const g1 = u * x1 + v * y1 + w * z1;
      const q = a * x + b * y + c * z;
      const q1 = a * x1 + b * y1 + c * z1;
      // Once and twice through the feeding: of q, trace and g.
      const fq1 = own * q1 + feed * q;
      const ft1 = own * t1 + feed * t;
      const fg1 = own * g1 + feed * g;
      const twice1 = own * fg1 + feed * own * g;
      const into =
        own * (linear - beta * own) * q + 0.5 * (base + (base + beta) * own + beta * own * own) * t;
      const back = own * (beta * own - linear) * g;
      const into1 =
        linear * fq1 -
        beta * (own * fq1 + feed * own * q) +
        0.5 * (base * t1 + (base + beta) * ft1 + beta * (own * ft1 + feed * own * t));
      const back1 = beta * twice1 - linear * fg1;
      x += u * into + a * back;
      y += v * into + b * back;
      z += w * into + c * back;
      t += 2 * ((base - beta) * own + beta * own * own - base) * g;
      x1 += u * into1 + a * back1;
      y1 += v * into1 + b * back1;
      z1 += w * into1 + c * back1;
      t1 += 2 * ((base - beta) * fg1 - base * g1 + beta * twice1);
      more += 2 * rest * (base * g1 + beta * fg1);
    }
    if (n + 1 >= to) break;
    a = axes[k + 3];
    b = axes[k + 4];
    c = axes[k + 5];
    const p = a * x + b * y + c * z;
    const p1 = a * x1 + b * y1 + c * z1;
    const e = 0.5 * t - p;
    const e1 = 0.5 * t1 - p1;
    const d = mine * p + stay * t;
    const d1 = mine * p1 + (stay * t1 + 0.5 * handed * e);
    x = fade * x + a * d;
    y = fade * y + b * d;
    z = fade * z + c * d;
    x1 = fade * x1 + a * d1;
    y1 = fade * y1 + b * d1;
    z1 = fade * z1 + c * d1;
    t -= fall * e;
    t1 += handed * e - fall * e1;
    more += last * e1;
  }
  state[0] = x;
  state[1] = y;
  state[2] = z;
  state[3] = t;
  state[4] = x1;
  state[5] = y1;
  state[6] = z1;
  state[7] = t1;
  state[8] = more;
}
