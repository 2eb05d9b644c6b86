import { nsga2, select } from '../global/nsga2.js';
import { optimizeInBatches } from '../local/session.js';
import { objectivesOf } from '../problem/judge.js';
import { constraintCount } from '../problem/limits.js';
import type { Candidate } from '../problem/problem.js';
import type { TaskRunner } from './contract.js';

/** Some generations of NSGA-II. */
export interface IslandInput {
  readonly population: number;
  /** Points of the unit cube to begin with; filled up by a Latin hypercube. */
  readonly start: readonly (readonly number[])[];
  /** Brightness below which nothing is of interest; null for none. */
  readonly floor: number | null;
}

/** The points of the unit cube that later generations should begin with, best first. */
export interface IslandSummary {
  readonly population: readonly (readonly number[])[];
}

export const islandTask: TaskRunner = (task, { spec, problem, recorder, seed }): IslandSummary => {
  const { population, start, floor } = task.input as IslandInput;
  const replyOf = (candidate: Candidate) => {
    const { brightness, constraints: limits } = candidate;
    const constraints = floor === null ? limits : [floor - brightness, ...limits];
    return { objectives: objectivesOf(candidate), constraints };
  };
  const { space } = problem;
  const constraints = constraintCount(spec.goal.limits) + (floor === null ? 0 : 1);
  const objectives = spec.goal.third === null ? 2 : 3;
  const setup = { space, objectives, constraints, start, seed, budget: task.budget };
  const { trace } = optimizeInBatches(nsga2({ population }), setup, (points) =>
    recorder.evaluateMany(points).map(replyOf),
  );
  return { population: select(trace, population).map((member) => member.x) };
};
