import { evaluate } from '../../core/evaluate.js';
import { type EvaluateGradient, evaluateGradient } from '../../core/gradient.js';
import type { Evaluate } from '../problem/problem.js';

/** The evaluation that a search uses unless it is given another. */
export const evaluateForSearch: Evaluate = (design) => evaluate(design, 'search');

/** Figures by the exact phonon method, for the fronts of searches with a cheaper one. */
export const evaluateExactly: Evaluate = (design) => evaluate(design, 'quoted');

/** The exact derivatives that a search uses. */
export const gradientForSearch: EvaluateGradient = evaluateGradient;
