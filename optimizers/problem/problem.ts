import type { EvaluateGradient } from '../../core/gradient.js';
import { type Design, type Figures, withExactPhonons } from '../../core/index.js';
import { PropagationError } from '../../core/kernels/count.js';
import type { Goal, ProblemSpec } from './contract.js';
import { type Differentiated, differentiator } from './gradient.js';
import { infeasible, judge, type Verdict } from './judge.js';
import { applyParameters } from './path.js';
import { type Space, transformOf } from './space.js';

/** Figures of a design; `core`'s `evaluate` at the search's accuracy, or a stand-in. */
export type Evaluate = (design: Design) => Figures;

/** Figures of independent designs, in their order; null where a pulse is beyond what can be integrated. */
export type EvaluateMany = (designs: readonly Design[]) => readonly (Figures | null)[];

/** One evaluated candidate judged by the goal. */
export interface Candidate extends Verdict {
  /** Free-parameter values, internal units. */
  readonly values: readonly number[];
  /** Null when the pulse is beyond what can be integrated; the candidate is then infeasible. */
  readonly figures: Figures | null;
}

/** A search problem in the unit cube. */
export interface Problem {
  readonly space: Space;
  /** From the unit cube to parameter values, internal units; a coordinate outside [0, 1] is clamped. */
  readonly valuesAt: (x: readonly number[]) => number[];
  /** From parameter values to the unit cube. */
  readonly unitOf: (values: readonly number[]) => number[];
  /** The same parameters and figures judged by another goal. */
  readonly withGoal: (goal: Goal) => Problem;
  /** The same parameters and goal by the exact phonon method, at the accuracy of quoted figures. */
  readonly withExactPhonons: () => Problem;
  /** One objective value. */
  readonly evaluate: (x: readonly number[]) => Candidate;
  /** The same of a whole batch, in its order: threads may share it out. */
  readonly evaluateMany: (points: readonly (readonly number[])[]) => Candidate[];
  /** The verdict with exact derivatives; null where the problem has none. */
  readonly differentiate: ((x: readonly number[]) => Differentiated) | null;
}

function attempt<T extends object>(act: () => T): T | null {
  try {
    return act();
  } catch (error) {
    if (!(error instanceof PropagationError)) throw error;
    return null;
  }
}

export const evaluateOneByOne =
  (evaluate: Evaluate): EvaluateMany =>
  (designs) =>
    designs.map((design) => attempt(() => evaluate(design)));

/**
 * Builds the problem of a specification. Throws when a path does not exist, a tie is circular or a range is empty.
 * @param evaluateGradient figures with exact derivatives, or null for none
 * @param evaluateMany gives the figures of `evaluate`
 * @param evaluateExactly gives the figures by the exact phonon method, good enough to be quoted
 */
export function createProblem(
  spec: ProblemSpec,
  evaluate: Evaluate,
  evaluateGradient: EvaluateGradient | null = null,
  evaluateMany: EvaluateMany = evaluateOneByOne(evaluate),
  evaluateExactly: Evaluate = evaluate,
): Problem {
  const transforms = spec.parameters.map(transformOf);
  const valuesAt = (x: readonly number[]) => transforms.map((transform, i) => transform.value(x[i]));
  // A wrong path or a circular tie is a fault of the study, not of a candidate: found before the search.
  applyParameters(spec, valuesAt(transforms.map(() => 0)));
  const evaluatePoints = (points: readonly (readonly number[])[]): Candidate[] => {
    const all = points.map(valuesAt);
    const answers = evaluateMany(all.map((values) => applyParameters(spec, values)));
    return all.map((values, i) => {
      const figures = answers[i];
      return { values, figures, ...(figures ? judge(figures, spec.goal) : infeasible(spec.goal)) };
    });
  };
  const slopes = evaluateGradient && differentiator(spec, transforms, evaluateGradient);
  return {
    space: { dimension: transforms.length, categories: transforms.map((transform) => transform.categories) },
    valuesAt,
    withGoal: (goal) =>
      createProblem({ ...spec, goal }, evaluate, evaluateGradient, evaluateMany, evaluateExactly),
    withExactPhonons: () =>
      createProblem({ ...spec, design: withExactPhonons(spec.design) }, evaluateExactly),
    unitOf: (values) => transforms.map((transform, i) => transform.unit(values[i])),
    evaluate: (x) => evaluatePoints([x])[0],
    evaluateMany: evaluatePoints,
    differentiate:
      slopes &&
      ((x) => {
        const design = applyParameters(spec, valuesAt(x));
        return attempt(() => slopes(x, design)) ?? { ...infeasible(spec.goal), gradients: null };
      }),
  };
}
