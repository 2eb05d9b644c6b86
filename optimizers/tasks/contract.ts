import type { EvaluatedPoint } from '../problem/contract.js';

/** What a finished task leaves behind: plain JSON, the unit of the run ledger. */
export interface TaskResult {
  readonly id: string;
  readonly evaluations: number;
  /** The non-dominated ones of the task's own evaluations, by brightness. */
  readonly points: readonly EvaluatedPoint[];
  /** Plain JSON that later stages need. */
  readonly summary: unknown;
}
