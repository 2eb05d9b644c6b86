import { evaluate } from '../../core/evaluate.js';
import type { Evaluate } from '../problem/problem.js';

/** The evaluation that a search uses unless it is given another. */
export const evaluateForSearch: Evaluate = (design) => evaluate(design, 'search');
