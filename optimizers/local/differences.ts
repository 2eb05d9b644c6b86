import { FAILED, type Reply, type Trial } from './contract.js';

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
