import { UnsupportedDesign } from '../../core/evaluate.js';
import { PropagationError } from '../../core/kernels/count.js';
import { PhononRangeError } from '../../core/phonons/count.js';
import { DispersionError } from '../../core/pulse/index.js';

/** An error as plain data: a message between threads keeps neither its class nor its name. */
export interface Failure {
  readonly name: string;
  readonly message: string;
  readonly stack: string | null;
}

/** Errors that say what is wrong with a design: whoever catches them looks at their class. */
const DESIGN_ERRORS = [PropagationError, UnsupportedDesign, PhononRangeError, DispersionError];

export function failureOf(error: unknown): Failure {
  if (!(error instanceof Error)) return { name: 'Error', message: String(error), stack: null };
  return { name: error.name, message: error.message, stack: error.stack ?? null };
}

/**
 * The error again: one about a design of its own class and with its own words, any other one with the place where it
 * came from before them. The trace is that of the thread that threw it.
 */
export function errorOf(failure: Failure, place: string): Error {
  const { name, message, stack } = failure;
  const known = DESIGN_ERRORS.find((kind) => new kind('').name === name);
  const error = known === undefined ? new Error(`${place}: ${message}`) : new known(message);
  if (stack !== null) error.stack = stack;
  return error;
}
