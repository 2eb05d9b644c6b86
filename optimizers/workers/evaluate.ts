import { evaluate } from '../../core/evaluate.js';
import type { EvaluateGradient } from '../../core/gradient.js';
import type { Evaluate } from '../problem/problem.js';

/** The evaluation that a search uses unless it is given another. */
export const evaluateForSearch: Evaluate = (design) => evaluate(design, 'search');

/** The exact derivatives that a search uses; null: it takes differences. */
export const gradientForSearch: EvaluateGradient | null = null;
