import { HBAR, K_B } from '../units/constants.js';

/**
 * Longitudinal-acoustic phonon bath J(ω) = A ω³ exp(−ω²/ω_c²) at a temperature (deformation-potential coupling of a
 * spherical dot: Krummheuer, Axt & Kuhn, Phys. Rev. B 65, 195313 (2002)).
 */
export interface Bath {
  /** A, ps². */
  readonly coupling: number;
  /** ω_c, 1/ps. */
  readonly cutoff: number;
  /** K. */
  readonly temperature: number;
}

/** A complex function of time, sampled. */
export interface ComplexSeries {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** J(ω), 1/ps. */
export function spectralDensity(bath: Bath, omega: number): number {
  return bath.coupling * omega ** 3 * Math.exp(-((omega / bath.cutoff) ** 2));
}

/** Mean occupation of a phonon of angular frequency ω (1/ps). */
export function occupation(omega: number, temperature: number): number {
  return temperature === 0 ? 0 : 1 / Math.expm1((HBAR * omega) / (K_B * temperature));
}

/** Δ_p = ∫J/ω dω = A√π ω_c³/4, 1/ps: by how much the bath lowers a level with one exciton. */
export function relaxationShift(bath: Bath): number {
  return (bath.coupling * Math.sqrt(Math.PI) * bath.cutoff ** 3) / 4;
}

/** Upper end of the frequency integrals in units of ω_c: exp(−7²) is below rounding. */
const HIGHEST = 7;
const NODES = 480;

/** ∫_0^∞ J(ω) ω^{−power} [coth(ħω/2k_BT) cos ωt − i sin ωt] dω; power 0 is C(t), power 2 is φ(t). */
function bathIntegral(bath: Bath, power: number, times: Float64Array): ComplexSeries {
  const { nodes, weights } = gaussLegendre(NODES);
  const top = HIGHEST * bath.cutoff;
  const re = new Float64Array(times.length);
  const im = new Float64Array(times.length);
  for (let q = 0; q < NODES; q++) {
    const omega = (top * (nodes[q] + 1)) / 2;
    const weight =
      ((weights[q] * top) / 2) *
      bath.coupling *
      omega ** (3 - power) *
      Math.exp(-((omega / bath.cutoff) ** 2));
    const thermal = weight * (1 + 2 * occupation(omega, bath.temperature));
    for (let i = 0; i < times.length; i++) {
      const angle = omega * times[i];
      re[i] += thermal * Math.cos(angle);
      im[i] -= weight * Math.sin(angle);
    }
  }
  return { re, im };
}

/** Bath correlation C(t) = ∫J(ω)[coth(ħω/2k_BT) cos ωt − i sin ωt]dω, 1/ps². Times in ps, up to `longestTime`. */
export function correlation(bath: Bath, times: Float64Array): ComplexSeries {
  return bathIntegral(bath, 0, times);
}

/**
 * φ(t) = ∫J/ω²[coth cos ωt − i sin ωt]dω of the independent-boson model (Mahan, Many-Particle Physics): the coherence
 * after a δ-pulse falls as exp(φ(t) − φ(0)).
 */
export function displacement(bath: Bath, times: Float64Array): ComplexSeries {
  return bathIntegral(bath, 2, times);
}

/** Longest time at which the integrals above are resolved, ps. */
export function longestTime(bath: Bath): number {
  return 85 / bath.cutoff;
}

const rules = new Map<number, { nodes: Float64Array; weights: Float64Array }>();

/** Gauss–Legendre rule on [−1, 1] by Newton's method (Abramowitz & Stegun 25.4.29). */
export function gaussLegendre(n: number): { nodes: Float64Array; weights: Float64Array } {
  const known = rules.get(n);
  if (known) return known;
  const nodes = new Float64Array(n);
  const weights = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let x = Math.cos((Math.PI * (i + 0.75)) / (n + 0.5));
    let slope = 1;
    for (let iteration = 0; iteration < 50; iteration++) {
      let previous = 1;
      let value = x;
      for (let k = 2; k <= n; k++) {
        const next = ((2 * k - 1) * x * value - (k - 1) * previous) / k;
        previous = value;
        value = next;
      }
      slope = (n * (x * value - previous)) / (x * x - 1);
      const change = value / slope;
      x -= change;
      if (Math.abs(change) < 1e-15) break;
    }
    nodes[i] = x;
    weights[i] = 2 / ((1 - x * x) * slope * slope);
  }
  const rule = { nodes, weights };
  rules.set(n, rule);
  return rule;
}
