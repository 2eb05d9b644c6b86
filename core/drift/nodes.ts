import type { Design } from '../design.js';
import { gaussHermite } from '../numerics/index.js';
import { HBAR, RAD_PER_PS_PER_GHZ } from '../units/constants.js';

/** One point of a drift average. Relative changes of every area and width in common; shift of the emitter, meV. */
export interface DriftNode {
  readonly weight: number;
  readonly area: number;
  readonly width: number;
  readonly shift: number;
}

interface Rule {
  readonly nodes: readonly number[];
  readonly weights: readonly number[];
}

/** Error that a rule may leave on a smooth figure of order one. */
const LOG_TARGET = Math.log(1e-10);

/**
 * Nodes and weights for the mean over a standard normal variable of a function with oscillations up to e^{iax} and
 * its nearest pole at distance d from the real axis. Gauss–Hermite is cheapest for smooth functions; the trapezoidal
 * rule converges faster near poles (Trefethen & Weideman, SIAM Rev. 56, 385 (2014)).
 */
export function normalRule(phase: number, pole: number, effort: number): Rule {
  const hermite = Math.ceil(hermiteCount(phase, pole) * effort);
  const step = Math.min((2 * Math.PI) / (phase + 6.8), (2 * Math.PI * pole) / -LOG_TARGET) / effort;
  const half = Math.ceil(6.8 / step);
  return hermite <= 2 * half + 1 && hermite <= 64 ? gaussHermite(hermite) : trapezoid(step, half);
}

function hermiteCount(phase: number, pole: number): number {
  let n = 2;
  let logError = Math.log(Math.max(phase, 1e-6) ** 4 / 12);
  while (logError > LOG_TARGET && n < 200) {
    n++;
    logError += 2 * Math.log(Math.max(phase, 1e-6)) - Math.log(2 * (2 * n - 1));
  }
  return Math.max(n, poleCount(pole), 3);
}

/** Nodes that bring 1/(1 + x²/d²) to 1e-10: a fit, safe by up to two nodes, to counts found numerically for d ≥ 2. */
function poleCount(d: number): number {
  if (d > 60) return 3;
  return Math.ceil((LOG_TARGET / (2 * d)) ** 2 + 4 + 18 / (d + 2));
}

function trapezoid(step: number, half: number): Rule {
  const nodes = Array.from({ length: 2 * half + 1 }, (_, k) => (k - half) * step);
  const raw = nodes.map((x) => Math.exp((-x * x) / 2));
  const sum = raw.reduce((a, b) => a + b, 0);
  return { nodes, weights: raw.map((w) => w / sum) };
}

const SINGLE: Rule = { nodes: [0], weights: [1] };

/**
 * The tensor product of the rules of every drift of a design, chosen from the pulse and the filter.
 * @param effort 1 for a search; larger for a check with more nodes
 * @param duration time in which the drive acts, ps
 */
export function driftNodes(design: Design, duration: number, effort: number): DriftNode[] {
  const { drift, pulse, collection, emitter } = design;
  if (!drift) return [{ weight: 1, area: 0, width: 0, shift: 0 }];
  const rotation = pulse.tones.reduce((s, t) => s + Math.abs(t.area), 0);
  const area = drift.area > 0 ? normalRule(drift.area * rotation, Number.POSITIVE_INFINITY, effort) : SINGLE;
  const width = drift.width > 0 ? normalRule(drift.width * (rotation + 2), 1 / drift.width, effort) : SINGLE;
  const spread = drift.detuning / HBAR;
  const kappa = collection.filter ? collection.filter.fwhm * RAD_PER_PS_PER_GHZ : Number.POSITIVE_INFINITY;
  const filterPole = (kappa + 1 / emitter.lifetime) / 2;
  // A sech pulse of FWHM τ excites as sech²(πΔT/2ħ) with T = τ/1.763 (Rosen & Zener): poles at 1.763/τ.
  const pulsePole = 1.763 / Math.max(...pulse.tones.map((t) => t.fwhm));
  const pole = Math.min(filterPole, pulsePole) / spread;
  const shift = spread > 0 ? normalRule(spread * duration, pole, effort) : SINGLE;
  const out: DriftNode[] = [];
  area.nodes.forEach((a, i) => {
    width.nodes.forEach((w, j) => {
      shift.nodes.forEach((d, k) => {
        out.push({
          weight: area.weights[i] * width.weights[j] * shift.weights[k],
          area: a * drift.area,
          width: w * drift.width,
          shift: d * drift.detuning,
        });
      });
    });
  });
  return out;
}

/** The design as it stands at a drift node (the shift of the emitter is the propagator's business). */
export function driftedDesign(design: Design, node: DriftNode): Design {
  if (node.area === 0 && node.width === 0) return design;
  const tones = design.pulse.tones.map((t) => ({
    ...t,
    area: t.area * (1 + node.area),
    fwhm: t.fwhm * (1 + node.width),
  }));
  return { ...design, pulse: { ...design.pulse, tones } };
}
