import { take, takeZeros } from './arena.js';
import { turnAbout, turnAxes } from './axes.js';
import type { Chain } from './chain.js';
import { RECORD, recordKicks } from './chain-adjoint.js';
import { phaseAt } from './frame.js';
import { type Energies, spatialVectors } from './magnus.js';
import { BLOCK, NODES, PLACES } from './nodes.js';
import { energyAt, kickOver, type Pace, paceOf, shrink } from './pace.js';
import type { BlochProblem, BlochSpan } from './problem.js';
import { axisOf } from './run.js';
import { addComplex, type Grid, sampleDrive } from './table.js';

/** One span or gap as it was propagated, with its places in the tape. */
export interface Stretch {
  readonly part: BlochSpan;
  readonly steps: number;
  readonly grid: Grid;
  readonly pace: Pace;
  readonly energies: Energies;
  readonly samples: Float64Array;
  readonly turns: Float64Array | null;
  readonly vectors: Float64Array;
  readonly quaternions: Float64Array;
  /** Axis of the kick before each step and of the one after the last. */
  readonly axes: Float64Array;
  /** State of each chain before each kick. */
  readonly records: readonly Float64Array[];
}

/**
 * Propagates chains once more and keeps what a reverse sweep needs. Corrections that differ from lane to lane are left
 * out: they change derivatives by 1e-6 at most. The tape lies in the arena.
 */
export function recordTape(
  problem: BlochProblem,
  counts: readonly number[],
  chains: readonly Chain[],
): Stretch[] {
  const q = takeZeros(4);
  q[0] = 1;
  return problem.spans.map((part, index) => {
    const { span, frame } = part;
    if (!span.gap && index > 0) turnAbout(q, phaseAt(frame, span.start));
    const stretch = span.gap ? gap(problem, part, q) : propagate(problem, part, counts[index], q);
    chains.forEach((chain, c) => {
      record(chain, stretch, stretch.records[c]);
    });
    if (!span.gap) turnAbout(q, -phaseAt(frame, span.end));
    return stretch;
  });

  function record(chain: Chain, { steps, pace, axes }: Stretch, into: Float64Array): void {
    recordKicks(chain, pace.half, axes, 0, 1, into);
    if (steps === 0) return;
    recordKicks(chain, pace.full, axes, 1, steps, into);
    recordKicks(chain, pace.half, axes, steps, steps + 1, into);
  }

  function gap({ model }: BlochProblem, part: BlochSpan, turning: Float64Array): Stretch {
    const length = part.span.end - part.span.start;
    turnAbout(turning, model.energy * length);
    const kick = kickOver(problem, length);
    const stretch = blank(part, 0, { ...paceOf(problem, part, 1), half: kick, full: kick });
    axisOf(turning, stretch.axes);
    return stretch;
  }

  function blank(part: BlochSpan, steps: number, pace: Pace): Stretch {
    const { frame, source, span } = part;
    const { h } = pace;
    const follow = source.kind === 'sampled' && source.follow;
    return {
      part,
      steps,
      pace,
      grid: { start: span.start, h },
      energies: {
        first: energyAt(problem.model.energy, frame, h, span.start + 0.5 * h),
        slope: 2 * frame.chirp * h * h,
        axial: pace.axial,
      },
      samples: takeZeros(2 * NODES * steps),
      turns: follow ? take(steps) : null,
      vectors: take(3 * steps),
      quaternions: take(4 * steps),
      axes: take(3 * (steps + 1)),
      records: chains.map(() => take(RECORD * (steps + 1))),
    };
  }

  function propagate(
    { drive }: BlochProblem,
    part: BlochSpan,
    steps: number,
    turning: Float64Array,
  ): Stretch {
    const { span, frame, source } = part;
    const stretch = blank(part, steps, paceOf(problem, part, steps));
    const { samples, turns, vectors, axes, energies, grid, pace } = stretch;
    if (source.kind === 'sampled') {
      sampleDrive(drive, frame, pace.scale, grid, 0, steps, span, turns, samples);
    } else {
      for (let from = 0; from < steps; from += BLOCK) {
        for (const tone of source.tones)
          addComplex(tone, pace.scale, grid, from, Math.min(steps, from + BLOCK), samples);
      }
    }
    if (pace.quartic > 0) shrink(samples, pace.quartic, 2, steps);
    spatialVectors(samples, energies, turns, 0, steps, vectors, null);
    axisOf(turning, axes);
    turnAxes(vectors, turns, 0, steps, turning, axes, null, stretch.quaternions);
    return stretch;
  }
}

/** Times of a stretch's samples, ps. */
export function sampleTimes({ grid, steps }: Stretch, times: Float64Array, at: number): void {
  for (let n = 0, i = at; n < steps; n++) {
    for (let j = 0; j < NODES; j++, i++) times[i] = grid.start + (n + 0.5 + PLACES[j]) * grid.h;
  }
}
