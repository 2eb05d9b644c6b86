import { resetArena, take } from './arena.js';
import type { Chain } from './chain.js';
import { RECORD, recordKicks } from './chain-adjoint.js';
import type { Energies } from './magnus.js';
import { NODES, PLACES } from './nodes.js';
import type { Pace } from './pace.js';
import type { BlochSpan } from './problem.js';
import type { Grid } from './table.js';

/** One span or gap as it was propagated; its arrays lie in the arena. */
export interface Stretch {
  readonly part: BlochSpan;
  readonly steps: number;
  readonly grid: Grid;
  readonly pace: Pace;
  readonly energies: Energies;
  /** a + ib at samples[8n + 2j], samples[8n + 2j + 1]. */
  readonly samples: Float64Array;
  readonly turns: Float64Array | null;
  readonly vectors: Float64Array;
  /** The rotation after each step. */
  readonly quaternions: Float64Array;
  /** Axis of the kick before each step and of the one after the last. */
  readonly axes: Float64Array;
}

/** A block of steps as `propagate` (run.ts) works on it. */
export interface Block {
  readonly samples: Float64Array;
  readonly turns: Float64Array | null;
  readonly vectors: Float64Array;
  readonly quaternions: Float64Array;
  readonly axes: Float64Array;
}

/** Keeps of a run what a reverse sweep needs. */
export class Tape {
  readonly stretches: Stretch[] = [];

  /** Begins anew, for another run. */
  rewind(): void {
    this.stretches.length = 0;
    resetArena();
  }

  /** Begins a span, or a gap of no steps, with the axis that holds before it. */
  begin(
    part: BlochSpan,
    steps: number,
    pace: Pace,
    energies: Energies,
    follows: boolean,
    axes: Float64Array,
  ): void {
    const stretch: Stretch = {
      part,
      steps,
      pace,
      energies,
      grid: { start: part.span.start, h: pace.h },
      samples: take(2 * NODES * steps),
      turns: follows ? take(steps) : null,
      vectors: take(3 * steps),
      quaternions: take(4 * steps),
      axes: take(3 * (steps + 1)),
    };
    for (let i = 0; i < 3; i++) stretch.axes[i] = axes[i];
    this.stretches.push(stretch);
  }

  /** Keeps steps from … from + steps − 1 of the span begun last. `width` 1: samples are real. */
  keep(block: Block, from: number, steps: number, width: 1 | 2): void {
    const { samples, turns, vectors, quaternions, axes } = this.stretches[this.stretches.length - 1];
    copy(block.vectors, 0, vectors, 3 * from, 3 * steps);
    copy(block.quaternions, 0, quaternions, 4 * from, 4 * steps);
    copy(block.axes, 3, axes, 3 * (from + 1), 3 * steps);
    if (turns && block.turns) copy(block.turns, 0, turns, from, steps);
    if (width === 2) {
      copy(block.samples, 0, samples, 2 * NODES * from, 2 * NODES * steps);
      return;
    }
    for (let i = 0, k = 2 * NODES * from; i < NODES * steps; i++, k += 2) {
      samples[k] = block.samples[i];
      samples[k + 1] = 0;
    }
  }
}

function copy(source: Float64Array, at: number, target: Float64Array, to: number, length: number): void {
  for (let i = 0; i < length; i++) target[to + i] = source[at + i];
}

/**
 * Takes a chain through the kicks of a run and writes its state before each of them, one array per stretch. Corrections
 * that differ from lane to lane are left out: they change derivatives by 1e-6 at most.
 */
export function recordChain(chain: Chain, stretches: readonly Stretch[]): Float64Array[] {
  return stretches.map(({ steps, pace, axes }) => {
    const record = take(RECORD * (steps + 1));
    recordKicks(chain, pace.half, axes, 0, 1, record);
    if (steps > 0) {
      recordKicks(chain, pace.full, axes, 1, steps, record);
      recordKicks(chain, pace.half, axes, steps, steps + 1, record);
    }
    return record;
  });
}

/** Times of a stretch's samples, ps. */
export function sampleTimes({ grid, steps }: Stretch, times: Float64Array, at: number): void {
  for (let n = 0, i = at; n < steps; n++) {
    for (let j = 0; j < NODES; j++, i++) times[i] = grid.start + (n + 0.5 + PLACES[j]) * grid.h;
  }
}
