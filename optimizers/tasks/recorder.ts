import { Archive, lexicographic } from '../front/archive.js';
import { GRADIENT_COST } from '../local/contract.js';
import type { EvaluatedPoint, Goal } from '../problem/contract.js';
import type { GradientRows } from '../problem/gradient.js';
import { type Judgement, judge, objectivesOf } from '../problem/judge.js';
import type { Candidate, Problem } from '../problem/problem.js';

/** A point of the front with the numbers of the goal read from its figures. */
export interface JudgedPoint extends EvaluatedPoint, Judgement {
  /** Stage that found it; empty where that is not told apart. */
  readonly stage: string;
}

/**
 * Archive of designs for least impurity, most brightness and, where points have one and it is not to be `flat`, the
 * least third number; contents free of order. Sorted by impurity, which without a third number is by brightness.
 */
export class PointArchive {
  readonly #archive = new Archive<JudgedPoint>((a, b) => lexicographic(a.values, b.values));
  readonly #flat: boolean;

  constructor(flat = false) {
    this.#flat = flat;
  }

  add(point: JudgedPoint): boolean {
    return this.#archive.add(objectivesOf(this.#flat ? { ...point, third: null } : point), point);
  }

  get points(): JudgedPoint[] {
    return this.#archive.entries.map((entry) => entry.item);
  }
}

/** Keeps the point with the least violation of the limits, the first of equals in the order of their values. */
export class NearestPoint {
  #nearest: { readonly point: EvaluatedPoint; readonly violation: number } | null = null;

  offer({ values, figures }: EvaluatedPoint, violation: number): void {
    const old = this.#nearest;
    if (!Number.isFinite(violation)) return;
    const tie = old !== null && violation === old.violation && lexicographic(values, old.point.values) < 0;
    if (old === null || violation < old.violation || tie)
      this.#nearest = { point: { values, figures }, violation };
  }

  get point(): EvaluatedPoint | null {
    return this.#nearest?.point ?? null;
  }
}

/** Counts and archives the evaluations of a task, and counts its gradients. */
export class Recorder {
  readonly #problem: Problem;
  readonly #goal: Goal | null;
  readonly #archive = new PointArchive();
  readonly #nearest = new NearestPoint();
  #evaluations = 0;

  /** @param goal of what is archived, where it is another than that of `problem`, such as a slice; null where not */
  constructor(problem: Problem, goal: Goal | null) {
    this.#problem = problem;
    this.#goal = goal;
  }

  evaluate(x: readonly number[]): Candidate {
    return this.#take(this.#problem.evaluate(x));
  }

  /** The same of a whole batch, in its order. */
  evaluateMany(points: readonly (readonly number[])[]): Candidate[] {
    return this.#problem.evaluateMany(points).map((candidate) => this.#take(candidate));
  }

  #take(candidate: Candidate): Candidate {
    this.#evaluations++;
    const { figures, values } = candidate;
    if (figures === null) return candidate;
    const verdict = this.#goal === null ? candidate : judge(figures, this.#goal);
    const { impurity, brightness, third, violation } = verdict;
    if (violation === 0) this.#archive.add({ values, figures, impurity, brightness, third, stage: '' });
    else this.#nearest.offer({ values, figures }, violation);
    return candidate;
  }

  /** Counts an evaluation of another problem; archived only where `kept`. */
  evaluateOn(problem: Problem, x: readonly number[], kept: boolean): Candidate {
    const candidate = problem.evaluate(x);
    if (kept) return this.#take(candidate);
    this.#evaluations++;
    return candidate;
  }

  /** Whether exact derivatives can be asked for. */
  get differentiable(): boolean {
    return this.#problem.differentiate !== null;
  }

  /** Exact derivatives at a point that was evaluated, at the cost of two evaluations; null where there are none. */
  differentiate(x: readonly number[]): GradientRows | null {
    this.#evaluations += GRADIENT_COST;
    return this.#problem.differentiate?.(x).gradients ?? null;
  }

  get evaluations(): number {
    return this.#evaluations;
  }

  /** The one that comes nearest to the limits, where none meets them; null otherwise. */
  get nearest(): EvaluatedPoint | null {
    return this.#archive.points.length > 0 ? null : this.#nearest.point;
  }

  get points(): EvaluatedPoint[] {
    return this.#archive.points.map(({ values, figures }) => ({ values, figures }));
  }
}
