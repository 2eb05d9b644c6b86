import { FAILED, type Reply, type Steps, type Trial } from './contract.js';

/** Value and first derivatives, with respect to the free coordinates, of the objective and of each constraint. */
export interface Expansion {
  readonly reply: Reply;
  /** Rows: objective, then each constraint. */
  readonly gradients: readonly (readonly number[])[];
}

/** All numbers of a reply in one row: objective, then constraints. */
export const rowOf = (reply: Reply): number[] => [reply.objectives[0], ...reply.constraints];

export const failed = (reply: Reply): boolean => rowOf(reply).some((value) => Math.abs(value) >= FAILED);

/** Step of the differences along each free coordinate: into the cube. */
export function differenceTrials(x: Trial, free: readonly number[], width: number): number[][] {
  return free.map((coordinate) => {
    const next = [...x];
    next[coordinate] += x[coordinate] <= 0.5 ? width : -width;
    return next;
  });
}

/** One-sided difference quotients; a failed neighbour counts as a flat direction. */
export function expand(
  x: Trial,
  reply: Reply,
  free: readonly number[],
  trials: readonly Trial[],
  replies: readonly Reply[],
): Expansion {
  const center = rowOf(reply);
  const gradients = center.map((value, row) =>
    free.map((coordinate, i) =>
      failed(replies[i]) ? 0 : (rowOf(replies[i])[row] - value) / (trials[i][coordinate] - x[coordinate]),
    ),
  );
  return { reply, gradients };
}

/** Divides the objective by its start value, so that tolerances and multipliers have a scale; the order stays. */
export const scaledReply = (reply: Reply, scale: number): Reply =>
  failed(reply) ? reply : { ...reply, objectives: [reply.objectives[0] / scale] };

/** Gradients that were asked for in vain before a method gives them up. */
const PATIENCE = 2;

/** Makes expansions from exact derivatives, asked for where `exact` allows it, else from differences. */
export class Expander {
  readonly #free: readonly number[];
  readonly #scale: number;
  readonly #width: number;
  #attempts: number;

  constructor(free: readonly number[], scale: number, width: number, exact: boolean) {
    this.#free = free;
    this.#scale = scale;
    this.#width = width;
    this.#attempts = exact ? PATIENCE : 0;
  }

  /** @param reply the one at `x`, its objective divided by the scale */
  *at(x: Trial, reply: Reply): Steps<Expansion> {
    let exact = reply.gradients;
    if (exact === undefined && this.#attempts > 0) {
      exact = (yield { gradientAt: x })[0].gradients;
      this.#attempts = exact === undefined ? this.#attempts - 1 : PATIENCE;
    }
    if (exact !== undefined) {
      const scales = exact.map((_, row) => (row === 0 ? this.#scale : 1));
      const gradients = exact.map((row, r) => this.#free.map((k) => row[k] / scales[r]));
      return { reply, gradients };
    }
    const trials = differenceTrials(x, this.#free, this.#width);
    const replies = yield trials;
    return expand(
      x,
      reply,
      this.#free,
      trials,
      replies.map((r) => scaledReply(r, this.#scale)),
    );
  }
}
