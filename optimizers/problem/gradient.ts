import type { EvaluateGradient } from '../../core/gradient.js';
import type { Design } from '../../core/index.js';
import type { Goal, ProblemSpec } from './contract.js';
import { judge, type Verdict } from './judge.js';
import { type LimitState, limitStates } from './limits.js';
import { rootOf } from './path.js';
import type { Transform } from './space.js';

/** Derivatives of impurity, brightness and each constraint (rows) by each coordinate of the cube; 0 along lists. */
export type GradientRows = readonly (readonly number[])[];

/** A verdict with its derivatives; null where they do not exist, such as for a design that is infeasible. */
export interface Differentiated extends Verdict {
  readonly gradients: GradientRows | null;
}

/** Slope of a constraint of `limitStates` by its figure. */
function constraintSlope({ side, bound, value }: LimitState): number {
  if (value === null) return 0;
  const size = Math.abs(value) + Math.abs(bound);
  if (!(size > 0)) return 0;
  const excess = 2 / size - (2 * (value - bound) * Math.sign(value)) / (size * size);
  return side === 'atMost' ? excess : -excess;
}

/** Design paths that move with each parameter: its own and the tied ones. */
function pathsOf(spec: ProblemSpec): (readonly string[])[] {
  const ties = new Map(spec.ties.map((tie) => [tie.path, tie]));
  return spec.parameters.map(({ path, kind }) =>
    kind === 'list'
      ? []
      : [path, ...spec.ties.filter((tie) => rootOf(tie, ties) === path).map((t) => t.path)],
  );
}

/** The figures that a goal reads: impurity and brightness, then those of its limits. */
function figuresOf(goal: Goal): string[] {
  const limits = goal.limits.map(({ figure }) => figure);
  return [...new Set([`collected.${goal.impurity}`, `signal.${goal.brightness}`, ...limits])];
}

/** Judges designs with exact derivatives, by the chain rule through the variables of the cube and their ties. */
export function differentiator(
  spec: ProblemSpec,
  transforms: readonly Transform[],
  evaluate: EvaluateGradient,
): (x: readonly number[], design: Design) => Differentiated {
  const { goal } = spec;
  const paths = pathsOf(spec);
  const parameters = paths.flat();
  const figures = figuresOf(goal);
  return (x, design) => {
    const answer = evaluate(design, figures, parameters);
    const verdict = judge(answer.figures, goal);
    if (answer.rows === null || !Number.isFinite(verdict.violation)) return { ...verdict, gradients: null };
    const rows = new Map(figures.map((figure, i) => [figure, answer.rows?.[i] ?? []]));
    const inCube = (figure: string, factor: number): number[] => {
      const row = rows.get(figure) ?? [];
      let at = 0;
      return paths.map((own, k) => {
        let slope = 0;
        for (let n = 0; n < own.length; n++) slope += row[at++];
        return own.length === 0 ? 0 : factor * slope * transforms[k].slope(x[k]);
      });
    };
    const states = limitStates(answer.figures, goal.limits);
    const gradients = [
      inCube(`collected.${goal.impurity}`, 1),
      inCube(`signal.${goal.brightness}`, 1),
      ...states.map((state) => inCube(state.limit.figure, constraintSlope(state))),
    ];
    const finite = gradients.every((row) => row.every(Number.isFinite));
    return { ...verdict, gradients: finite ? gradients : null };
  };
}
