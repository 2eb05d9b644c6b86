import type { ProblemSpec } from '../../optimizers/index.js';

/** A checked study: complete, readonly, internal units. Nothing downstream applies a default. */
export interface Study extends ProblemSpec {
  readonly title: string;
}
