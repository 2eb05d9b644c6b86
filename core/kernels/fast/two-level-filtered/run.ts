import type { CountRequest } from '../../count.js';
import type { TwoLevel } from '../two-level.js';
import { BLOCK, type Machine, machineFor } from './machine.js';
import { type Filter, stepNumbers } from './step.js';
import { type Grid, TableFiller } from './table.js';
import { moments } from './tail.js';

export interface FilteredProblem {
  readonly request: CountRequest;
  readonly model: TwoLevel;
  readonly filter: Filter;
  /** Centre of the filter in the drive's frame, 1/ps. */
  readonly center: number;
  readonly order: number;
  readonly start: number;
  readonly end: number;
  readonly follow: boolean;
}

export interface FilteredRun {
  readonly moments: readonly number[];
  readonly populations: readonly [number, number];
}

/** One propagation over so many uniform steps. */
export function run(
  problem: FilteredProblem,
  count: number,
  machine: Machine = machineFor(problem.order),
): FilteredRun {
  const { request, model, filter, center } = problem;
  const h = (problem.end - problem.start) / count;
  const numbers = stepNumbers(model, filter, h);
  const { legs, table, y } = machine;
  machine.begin(numbers);
  const grid: Grid = { start: problem.start, h, count, follow: problem.follow };
  const filler = new TableFiller(request.drive, model, center, grid, numbers.drive);
  for (let n = 0; n < count; n += BLOCK) {
    const end = Math.min(count, n + BLOCK);
    filler.fill(n, end, table);
    machine.advance(end - n);
  }
  const rho = legs.at(0, 0, 0);
  // The last decay stands half beyond the window.
  const upper = 0.5 * (y[rho + 6] - y[rho + 4]) * Math.exp(0.5 * model.decay * h);
  return {
    moments: moments(legs, y, model, filter, numbers),
    populations: [1 - upper, upper],
  };
}
