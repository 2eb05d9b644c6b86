import type { Accuracy, Design, Figures } from '../../core/index.js';
import { evaluate } from '../../core/index.js';
import { PropagationError } from '../../core/kernels/count.js';
import type { TaskRunner } from './contract.js';

/** Fixed designs to evaluate apart from the search and outside its budget. */
export interface FiguresInput {
  readonly designs: readonly Design[];
  readonly accuracy: Accuracy;
}

/** Figures of a design, or why there are none. */
export type FiguresResult =
  | { readonly figures: Figures; readonly failure: null }
  | { readonly figures: null; readonly failure: string };

function figuresOf(design: Design, accuracy: Accuracy): FiguresResult {
  try {
    return { figures: evaluate(design, accuracy), failure: null };
  } catch (error) {
    if (!(error instanceof PropagationError)) throw error;
    return { figures: null, failure: error.message };
  }
}

/** One result per design, in their order. */
export const figuresTask: TaskRunner = (task): readonly FiguresResult[] => {
  const { designs, accuracy } = task.input as FiguresInput;
  return designs.map((design) => figuresOf(design, accuracy));
};
