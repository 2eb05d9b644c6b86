import type { Figures } from '../../core/index.js';

/** What decides which figures exist: the same for every point of a run or scan. */
export interface FigureShape {
  readonly filtered: boolean;
  readonly drift: boolean;
  /** The laser has a measured π pulse, so that pulse energies are known. */
  readonly energies?: boolean;
  /** Goals are judged on a quantile of the drift. */
  readonly quantile?: boolean;
  readonly levels: readonly string[];
}

/** One figure by its path in the tree, such as `collected.multiphoton` or `emitted.p.2`. */
export function figureAt(figures: Figures, path: string): number | null {
  let node: unknown = figures;
  for (const key of path.split('.')) {
    if (node === null || typeof node !== 'object') return null;
    node = (node as Record<string, unknown>)[key];
  }
  return typeof node === 'number' ? node : null;
}

const SIGNAL = ['single', 'any', 'mean', 'multiphoton', 'g2'];

const QUANTILES = ['signal.single', 'signal.any', 'signal.mean', 'collected.multiphoton', 'collected.g2'];

function treePaths(shape: FigureShape): string[] {
  return [
    ...SIGNAL.map((name) => `signal.${name}`),
    ...SIGNAL.map((name) => `collected.${name}`),
    'collected.leakage',
    ...(shape.filtered
      ? ['mean', 'factorial2', 'g2', 'p.0', 'p.1', 'multiphoton'].map((name) => `filtered.${name}`)
      : []),
    ...['mean', 'factorial2', 'g2', 'p.0', 'p.1', 'p.2', 'p.3', 'multiphoton'].map((n) => `emitted.${n}`),
    ...shape.levels.map((name) => `populations.${name}`),
    ...['energy_pi_units', 'duration_ps', 'bandwidth_ghz'].map((name) => `pulse.${name}`),
    ...(shape.energies === true ? ['pulse.energy_fj'] : []),
    'pulse.peak_rabi_per_ps',
    'accuracy.steps',
    'accuracy.error_estimate',
  ];
}

/** Paths of all figures, in column order; under drift also those without it. */
export function figurePaths(shape: FigureShape): string[] {
  const paths = treePaths(shape);
  const quantiles = shape.quantile === true ? QUANTILES.map((name) => `quantile.${name}`) : [];
  return shape.drift ? [...quantiles, ...paths, ...paths.map((path) => `nominal.${path}`)] : paths;
}
