import type { Design, Figures } from '../../core/index.js';
import { evaluate } from '../../core/index.js';
import { PropagationError } from '../../core/kernels/count.js';
import type { TaskRunner } from './contract.js';

/** One design to evaluate anew, independently of the search. */
export interface VerifyInput {
  readonly design: Design;
}

/** Figures at accuracy `verified`, or why there are none. */
export type Verified =
  | { readonly figures: Figures; readonly failure: null }
  | { readonly figures: null; readonly failure: string };

export const verifyTask: TaskRunner = (task): Verified => {
  const { design } = task.input as VerifyInput;
  try {
    return { figures: evaluate(design, 'verified'), failure: null };
  } catch (error) {
    if (!(error instanceof PropagationError)) throw error;
    return { figures: null, failure: error.message };
  }
};
