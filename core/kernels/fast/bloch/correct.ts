import type { Chain, Correction } from './chain.js';

/**
 * Takes the kicks' second-order errors that differ from lane to lane out of a chain at the end of step n − 1. With Z
 * the feeding of lanes by jumps (dρ_gg/dt = γZρ_xx), δ = γ-dephasing over γ, P = (1 + Z)/2, M = Z − 1, e the inversion's axis
 * and b = B × e the transverse drive, the kicks' error per unit time is cancelled by
 *   (b∧e)[(h²γ²/48)δZ − (h⁴γ²Ω²/5760)(3Z² − 8δZ)] on the Bloch vectors,
 *   b·[−(h²γγ*·1/48)P + (h⁴γ²Ω²/1920)(Z − δ)P] from the traces to them, and
 *   bᵀ·[−(h²γγ*·1/24)M + (h⁴γ²Ω²/960)M(Z − δ)] back:
 * (h²/24)[[K,V],K] − (h⁴/1440)[[K,V], [[K,V],V] + [K,V̇]] of the Euler–Maclaurin series of the double sum over kicks,
 * without the parts common to all lanes, which scale the rotation.
 */
export function correct(
  chain: Chain,
  correction: Correction,
  axes: Float64Array,
  pulls: Float64Array,
  n: number,
): void {
  const { own, feed, rest, state } = chain;
  const { quadratic, quartic, ratio } = correction;
  const a = axes[3 * n];
  const b = axes[3 * n + 1];
  const c = axes[3 * n + 2];
  const u = pulls[4 * n];
  const v = pulls[4 * n + 1];
  const w = pulls[4 * n + 2];
  const beta = quartic * pulls[4 * n + 3];
  const base = quadratic - beta * ratio;
  const linear = -quadratic + (8 / 3) * beta * ratio;
  const p = a * state[0] + b * state[1] + c * state[2];
  const g = u * state[0] + v * state[1] + w * state[2];
  const p1 = a * state[4] + b * state[5] + c * state[6];
  const g1 = u * state[4] + v * state[5] + w * state[6];
  const t = state[3];
  const t1 = state[7];
  // Once and twice through the feeding: of p, trace and g.
  const fp1 = own * p1 + feed * p;
  const ft1 = own * t1 + feed * t;
  const fg1 = own * g1 + feed * g;
  const into = own * (linear - beta * own) * p + 0.5 * (base + (base + beta) * own + beta * own * own) * t;
  const back = own * (beta * own - linear) * g;
  const into1 =
    linear * fp1 -
    beta * (own * fp1 + feed * own * p) +
    0.5 * (base * t1 + (base + beta) * ft1 + beta * (own * ft1 + feed * own * t));
  const twice1 = own * fg1 + feed * own * g;
  const back1 = beta * twice1 - linear * fg1;
  state[0] += u * into + a * back;
  state[1] += v * into + b * back;
  state[2] += w * into + c * back;
  state[3] += 2 * ((base - beta) * own + beta * own * own - base) * g;
  state[4] += u * into1 + a * back1;
  state[5] += v * into1 + b * back1;
  state[6] += w * into1 + c * back1;
  state[7] += 2 * (-base * g1 + (base - beta) * fg1 + beta * twice1);
  state[8] += 2 * rest * (base * g1 + beta * fg1);
}
