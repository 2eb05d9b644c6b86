import type { Drive } from '../../../pulse/drive.js';
import type { BlochSpan } from '../bloch/problem.js';
import type { TwoLevel } from '../two-level.js';
import { type Machine, machineFor } from './machine.js';
import { type Filter, type StepNumbers, stepNumbers } from './step.js';
import { BLOCK, fillTable, type Steps } from './table.js';
import { moments } from './tail.js';

export interface FilteredProblem {
  readonly drive: Drive;
  readonly model: TwoLevel;
  /** The drive window. */
  readonly part: BlochSpan;
  readonly filter: Filter;
  /** Centre of the filter in the drive's frame, 1/ps. */
  readonly center: number;
  /** Number of moments. */
  readonly order: number;
}

export interface FilteredRun {
  readonly moments: readonly number[];
  readonly populations: readonly [number, number];
}

export function stepsOf(
  { drive, model, part, filter, center }: FilteredProblem,
  count: number,
): { readonly steps: Steps; readonly numbers: StepNumbers } {
  const h = (part.span.end - part.span.start) / count;
  const numbers = stepNumbers(model, filter, h);
  return { steps: { drive, model, part, center, count, h, scale: numbers.drive }, numbers };
}

/**
 * One propagation over so many uniform steps.
 * @param visit called before the first step of every block of steps (table.ts)
 */
export function run(
  problem: FilteredProblem,
  count: number,
  machine: Machine = machineFor(problem.order),
  visit?: (n: number) => void,
): FilteredRun {
  const { model, filter } = problem;
  const { steps, numbers } = stepsOf(problem, count);
  const { h } = steps;
  const { legs, table, y } = machine;
  machine.begin(numbers);
  for (let n = 0; n < count; n += BLOCK) {
    visit?.(n);
    const end = Math.min(count, n + BLOCK);
    fillTable(steps, n, end, table);
    machine.advance(end - n);
  }
  // The last decay stands half beyond the window.
  const upper = 0.5 * y[legs.at(0, 0, 0) + 4] * Math.exp(0.5 * model.decay * h);
  return {
    moments: moments(legs, y, model, filter, numbers),
    populations: [1 - upper, upper],
  };
}
