import type { Design } from '../design.js';
import { gaussHermite } from '../numerics/index.js';
import { GHZ_PER_MEV, HBAR, RAD_PER_PS_PER_GHZ } from '../units/constants.js';

/**
 * One point of a drift average. Relative changes of every area and width in common; shift of the emitter, meV; shift of
 * the filter's centre, GHz (0 when left out).
 */
export interface DriftNode {
  readonly weight: number;
  readonly area: number;
  readonly width: number;
  readonly shift: number;
  readonly center?: number;
}

/** Nodes and weights for the mean over a standard normal variable. */
export interface Rule {
  readonly nodes: readonly number[];
  readonly weights: readonly number[];
}

/** Error that a rule of effort 1 may leave on a smooth figure of order one. */
const LOG_TARGET = Math.log(1e-8);

/**
 * Nodes and weights for the mean over a standard normal variable of a function with oscillations up to e^{iax} and
 * its nearest pole at distance d from the real axis. Gauss–Hermite is cheapest for smooth functions; the trapezoidal
 * rule converges faster near poles (Trefethen & Weideman, SIAM Rev. 56, 385 (2014)).
 */
export function normalRule(phase: number, pole: number, effort: number): Rule {
  const hermite = Math.ceil(hermiteCount(phase, pole) * effort);
  const step = Math.min((2 * Math.PI) / (phase + REACH), (2 * Math.PI * pole) / -LOG_TARGET) / effort;
  const half = Math.ceil((REACH * Math.sqrt(effort)) / step);
  return hermite <= 2 * half + 1 && hermite <= 64 ? gaussHermite(hermite) : trapezoid(step, half);
}

/** Standard deviations after which a normal law has nothing left at the target. */
const REACH = 6.1;

function hermiteCount(phase: number, pole: number): number {
  let n = 2;
  let logError = Math.log(Math.max(phase, 1e-6) ** 4 / 12);
  while (logError > LOG_TARGET && n < 200) {
    n++;
    logError += 2 * Math.log(Math.max(phase, 1e-6)) - Math.log(2 * (2 * n - 1));
  }
  return Math.max(n, poleCount(pole), 3);
}

/** Nodes that bring 1/(1 + x²/d²) to the target: a fit to counts found numerically for d ≥ 2. */
function poleCount(d: number): number {
  return Math.max(3, Math.ceil((LOG_TARGET / (2 * d)) ** 2 + 3 + 14 / (d + 2) - 0.3));
}

function trapezoid(step: number, half: number): Rule {
  const nodes = Array.from({ length: 2 * half + 1 }, (_, k) => (k - half) * step);
  const raw = nodes.map((x) => Math.exp((-x * x) / 2));
  const sum = raw.reduce((a, b) => a + b, 0);
  return { nodes, weights: raw.map((w) => w / sum) };
}

const SINGLE: Rule = { nodes: [0], weights: [1] };

/** The rules of every drift of a design: area, width, detuning, filter centre; one node where there is none. */
export interface DriftAxes {
  readonly area: Rule;
  readonly width: Rule;
  readonly shift: Rule;
  readonly center: Rule;
}

/**
 * The rule of each drift, chosen from the pulse and the filter.
 * @param duration time in which the drive acts, ps
 * @param effort 1 for a search; larger for a check with more nodes
 */
export function driftAxes(design: Design, duration: number, effort: number): DriftAxes {
  const { drift, pulse, collection, emitter } = design;
  if (!drift) return { area: SINGLE, width: SINGLE, shift: SINGLE, center: SINGLE };
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
  // What passes is the light's spectrum convolved with the filter: analytic up to the filter's own pole at κ/2.
  const wander = collection.filter ? (drift.filterCenter ?? 0) * RAD_PER_PS_PER_GHZ : 0;
  const center = wander > 0 ? normalRule(0, kappa / 2 / wander, effort) : SINGLE;
  return { area, width, shift, center };
}

/** The tensor product of the rules of a design's drifts; the last axis runs fastest. */
export function driftNodes(design: Design, axes: DriftAxes): DriftNode[] {
  const { drift } = design;
  if (!drift) return [{ weight: 1, area: 0, width: 0, shift: 0 }];
  let out: DriftNode[] = [{ weight: 1, area: 0, width: 0, shift: 0, center: 0 }];
  const scales = {
    area: drift.area,
    width: drift.width,
    shift: drift.detuning,
    center: drift.filterCenter ?? 0,
  };
  for (const key of ['area', 'width', 'shift', 'center'] as const) {
    const { nodes, weights } = axes[key];
    out = out.flatMap((node) =>
      nodes.map((x, i) => ({ ...node, weight: node.weight * weights[i], [key]: x * scales[key] })),
    );
  }
  return out;
}

/** The design as it stands at a drift node (the shift of the emitter is the propagator's business). */
export function driftedDesign(design: Design, node: DriftNode): Design {
  const center = node.center ?? 0;
  if (node.area === 0 && node.width === 0 && center === 0) return design;
  const tones = design.pulse.tones.map((t) => ({
    ...t,
    area: t.area * (1 + node.area),
    fwhm: t.fwhm * (1 + node.width),
  }));
  const { filter } = design.collection;
  const moved = filter && { ...filter, center: filter.center + center };
  return {
    ...design,
    pulse: { ...design.pulse, tones },
    collection: { ...design.collection, filter: moved },
  };
}

/**
 * The fixed design at a point of the drift, itself without drift. The emitter stands still in a design, so laser and
 * filter move against it; a filter's own drift comes on top.
 */
export function designAtDrift(nominal: Design, node: Omit<DriftNode, 'weight'>): Design {
  const { pulse, collection, ...rest } = driftedDesign({ ...nominal, drift: null }, { ...node, weight: 1 });
  const tones = pulse.tones.map((t) => ({ ...t, detuning: t.detuning - node.shift }));
  const { filter } = collection;
  const center = filter === null ? 0 : filter.center - node.shift * GHZ_PER_MEV;
  return {
    ...rest,
    pulse: { ...pulse, tones },
    collection: { ...collection, filter: filter && { ...filter, center } },
  };
}
