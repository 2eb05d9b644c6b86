import type { CountRequest, CountResult } from '../../count.js';
import type { Span } from '../spans.js';
import { type Ladder, ladderOf } from './ladder.js';
import { frameEnergies, type Layout, layoutOf, lineFrequency, unevenEnergies } from './layout.js';
import { type Passage, State } from './state.js';
import { type Source, sourceOf } from './table.js';
import { UnitaryTable } from './unitary-table.js';

/** A request with what all its runs share. */
export interface Problem {
  readonly request: CountRequest;
  readonly spans: readonly Span[];
  readonly layout: Layout;
  readonly used: readonly boolean[];
  readonly ladder: Ladder | null;
  /** Of the levels in the request's frame without what counts as constant, 1/ps. */
  readonly energies: readonly number[];
  /** Frequency of the collected line in the request's frame, 1/ps: the state is kept in its frame. */
  readonly line: number;
  /** Per span, of the ladder's component; none without a ladder. */
  readonly sources: readonly Source[];
}

export function problemOf(request: CountRequest, spans: readonly Span[], used: readonly boolean[]): Problem {
  const all = frameEnergies(request);
  const line = lineFrequency(request, all);
  const uneven = unevenEnergies(request, all);
  const energies = all.map((e, i) => e - uneven[i]);
  const { drive, scheme } = request;
  const ladder = ladderOf(scheme, used);
  const layout = layoutOf(request, used, line, uneven);
  const climb = ladder ? 0.5 * (energies[ladder.levels[2]] - energies[ladder.levels[0]]) : 0;
  return {
    request,
    spans,
    used,
    energies,
    line,
    layout,
    ladder,
    sources: ladder ? spans.map((span) => sourceOf(drive, ladder.component, span, climb)) : [],
  };
}

/** The layout of a request that differs in its filter only, on the same places. */
export function layoutFor(request: CountRequest, { used, line }: Problem): Layout {
  return layoutOf(request, used, line, unevenEnergies(request, frameEnergies(request)));
}

/** One run, with what its derivatives need where they are wanted. */
export interface Run {
  readonly result: CountResult;
  readonly passages: readonly Passage[];
  /** Whether what derivatives need was kept. */
  readonly kept: boolean;
  /** The state at the end, where derivatives are wanted. */
  readonly final: Float64Array;
}

/** The rotations of a ladder on so many steps per span; null for gaps, and for other schemes, which make theirs as they go. */
export function tablesOf(problem: Problem, counts: readonly number[]): (UnitaryTable | null)[] {
  const { request, spans, ladder, sources, energies } = problem;
  return spans.map((span, s) =>
    ladder && !span.gap
      ? new UnitaryTable({ request, span, ladder, source: sources[s], energies }, counts[s])
      : null,
  );
}

/**
 * One run on uniform steps; null where a kick is too large for its series.
 * @param tables rotations on multiples of the counts
 */
export function run(
  problem: Problem,
  counts: readonly number[],
  keep = false,
  tables: readonly (UnitaryTable | null)[] = tablesOf(problem, counts),
): Run | null {
  const { layout, request, spans } = problem;
  const state = new State(problem, tables, keep);
  let steps = 0;
  for (let s = 0; s < spans.length; s++) {
    const span = spans[s];
    if (span.gap) state.rest(span.end - span.start);
    else if (!state.pass(s, counts[s])) return null;
    steps += span.gap ? 0 : counts[s];
  }
  const { y, passages } = state;
  const values: Record<string, number> = {};
  for (const { name, row } of layout.effects) values[name] = dot(row, y);
  const populations = request.scheme.levels.map((_, i) => dot(layout.populations[i], y));
  return {
    result: { values, populations, steps, localErrors: 0 },
    passages,
    kept: keep,
    final: keep ? y.slice() : y,
  };
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}
