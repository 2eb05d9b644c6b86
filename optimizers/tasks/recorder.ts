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

/** Counts and archives the evaluations of a task. */
export class Recorder {
  readonly #problem: Problem;
  readonly #archive = new PointArchive();
  #evaluations = 0;

  constructor(problem: Problem) {
    this.#problem = problem;
  }

  evaluate(x: readonly number[]): Candidate {
    this.#evaluations++;
    const candidate = this.#problem.evaluate(x);
    const { figures } = candidate;
    if (figures !== null && Number.isFinite(candidate.impurity)) this.#archive.add({ ...candidate, figures });
    return candidate;
  }

  get evaluations(): number {
    return this.#evaluations;
  }

  get points(): EvaluatedPoint[] {
    return this.#archive.points.map(({ values, figures }) => ({ values, figures }));
  }
}
