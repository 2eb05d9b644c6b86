import type { Figures } from '../../core/index.js';
import type { Limit } from './contract.js';

/** One side of a limit as a constraint, met when `constraint` ≤ 0. */
export interface LimitState {
  readonly limit: Limit;
  readonly side: 'atMost' | 'atLeast';
  readonly bound: number;
  /** Null where the figure does not exist: the limit is then not met. */
  readonly value: number | null;
  readonly constraint: number;
}

/** The number at a path of the tree of figures; null where there is none or it is not finite. */
export function figureOf(figures: Figures, path: string): number | null {
  let node: unknown = figures;
  for (const key of path.split('.')) {
    if (node === null || typeof node !== 'object') return null;
    node = (node as Record<string, unknown>)[key];
  }
  return typeof node === 'number' && Number.isFinite(node) ? node : null;
}

/**
 * Signed excess over a bound: the relative excess near the bound, within ±2 far away, so that constraints of any
 * magnitude can be summed and none drowns the others.
 */
function excess(value: number, bound: number): number {
  const size = Math.abs(value) + Math.abs(bound);
  return size > 0 ? (2 * (value - bound)) / size : 0;
}

/** Every bound of every limit with what the figures have there. */
export function limitStates(figures: Figures, limits: readonly Limit[]): LimitState[] {
  return limits.flatMap((limit) => {
    const value = figureOf(figures, limit.figure);
    const state = (side: 'atMost' | 'atLeast'): LimitState[] => {
      const bound = limit[side];
      if (bound === null) return [];
      const [above, below] = side === 'atMost' ? [value, bound] : [bound, value];
      const constraint = above === null || below === null ? 2 : excess(above, below);
      return [{ limit, side, bound, value, constraint }];
    };
    return [...state('atMost'), ...state('atLeast')];
  });
}

/** Number of constraints that limits make. */
export function constraintCount(limits: readonly Limit[]): number {
  return limits.reduce((sum, l) => sum + (l.atMost === null ? 0 : 1) + (l.atLeast === null ? 0 : 1), 0);
}
