import type { Design } from '../../core/index.js';
import type { FreeParameter, Goal } from '../../optimizers/index.js';

/** A checked study: complete, readonly, internal units. Nothing downstream applies a default. */
export interface Study {
  readonly title: string;
  /** The design with every fixed value in place; free values hold their start of range (or first of list). */
  readonly design: Design;
  /** Free parameters in the order of the file; empty for a fixed design. */
  readonly parameters: readonly FreeParameter[];
  /** Ties: `path` always has the value of `sameAs`. */
  readonly ties: readonly { readonly path: string; readonly sameAs: string }[];
  readonly goal: Goal;
  readonly search: { readonly evaluations: number; readonly seed: number };
}
