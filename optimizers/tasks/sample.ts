import type { TaskRunner } from './contract.js';

/** Evaluates a list of points of the unit cube. */
export interface SampleInput {
  readonly points: readonly (readonly number[])[];
}

/** What each point gave, in order; impurity is null where the candidate was infeasible. */
export interface SampleSummary {
  readonly replies: readonly {
    readonly impurity: number | null;
    readonly brightness: number;
    readonly constraints: readonly number[];
  }[];
}

export const sampleTask: TaskRunner = (task, { recorder }): SampleSummary => {
  const { points } = task.input as SampleInput;
  const candidates = recorder.evaluateMany(points.slice(0, task.budget));
  const replies = candidates.map(({ impurity, brightness, constraints }) => {
    if (!Number.isFinite(impurity)) return { impurity: null, brightness: 0, constraints: [] };
    return { impurity, brightness, constraints };
  });
  return { replies };
};
