import { Archive, lexicographic } from '../front/archive.js';
import type { EvaluatedPoint } from '../problem/contract.js';
import type { Judgement } from '../problem/judge.js';
import type { Candidate, Problem } from '../problem/problem.js';

/** A point of the front with the two numbers of the goal read from its figures. */
export interface JudgedPoint extends EvaluatedPoint, Judgement {}

/** Archive of designs for least impurity and most brightness; sorted by brightness, contents free of order. */
export class PointArchive {
  readonly #archive = new Archive<JudgedPoint>((a, b) => lexicographic(a.values, b.values));

  add(point: JudgedPoint): boolean {
    return this.#archive.add([point.impurity, -point.brightness], point);
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

/** Counts and archives the evaluations of a task. */
export class Recorder {
  readonly #problem: Problem;
  readonly #archive = new PointArchive();
  readonly #nearest = new NearestPoint();
  #evaluations = 0;

  constructor(problem: Problem) {
    this.#problem = problem;
  }

  evaluate(x: readonly number[]): Candidate {
    this.#evaluations++;
    const candidate = this.#problem.evaluate(x);
    const { figures, values, impurity, brightness, violation } = candidate;
    if (figures === null) return candidate;
    if (violation === 0) this.#archive.add({ values, figures, impurity, brightness });
    else this.#nearest.offer({ values, figures }, violation);
    return candidate;
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
