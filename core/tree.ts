import type { Design } from './design.js';
import { weightedMean } from './drift/mean.js';
import type { DriftAxes, DriftNode } from './drift/nodes.js';
import { driftQuantiles } from './drift/quantile.js';
import type { Figures, FigureTree, Note, QuantileFigures } from './figures.js';
import type { Sample, SampleRun } from './sample.js';

/** The means with the quantiles, where a design asks for them. */
export type DriftTree = FigureTree & Pick<Figures, 'quantile'>;

/** Drift nodes may each say something slightly different. */
const MOST_REMARKS = 3;

/** The figures of a design from what was found at the nodes of its drift. */
export function treeOf(
  design: Design,
  axes: DriftAxes,
  nodes: readonly DriftNode[],
  runs: readonly SampleRun[],
): DriftTree {
  if (runs.length === 1 && nodes[0].weight === 1) {
    const [{ sample, phonons, steps, error, remarks }] = runs;
    return figureTree(
      sample,
      phonons,
      { steps, error_estimate: error },
      remarks,
      quantiles(design, axes, runs),
    );
  }
  const mean = weightedMean(
    runs.map((r) => r.sample),
    nodes.map((n) => n.weight),
  );
  const { method } = runs[0].phonons;
  const flags = [...new Set(runs.flatMap((r) => r.phonons.flags))];
  const steps = runs.reduce((s, r) => s + r.steps, 0);
  const error_estimate = runs.reduce((m, r) => Math.max(m, r.error), 0);
  const remarks = [...new Set(runs.flatMap((r) => r.remarks))];
  const over = quantiles(design, axes, runs);
  return figureTree(mean, { method, flags }, { steps, error_estimate }, remarks, over);
}

/** Brightness that a share of the drift reaches, and impurity that it does not exceed; null where none is asked for. */
export function quantiles(
  design: Design,
  axes: DriftAxes,
  runs: readonly SampleRun[],
): QuantileFigures | null {
  const share = design.drift?.quantile ?? null;
  if (share === null) return null;
  const column = (of: (s: Sample) => number | null, below: number) => ({
    values: runs.map(({ sample }) => of(sample)),
    share: below,
  });
  const columns = [
    column((s) => s.signal.single, 1 - share),
    column((s) => anyOf(s.signal), 1 - share),
    column((s) => s.signal.mean, 1 - share),
    column((s) => s.collected.multiphoton, share),
    column((s) => ratio(s.collected.factorial2, s.collected.mean), share),
  ];
  const known = columns.filter((c): c is { values: number[]; share: number } => !c.values.includes(null));
  const found = driftQuantiles(axes, known);
  const [single, any, mean, multiphoton, g2] = columns.map((c) => found[known.indexOf(c as never)] ?? null);
  return { share, signal: { single, any, mean }, collected: { multiphoton, g2 } };
}

const anyOf = (c: Sample['signal']): number | null =>
  c.single === null || c.multiphoton === null ? null : c.single + c.multiphoton;

function ratio(factorial2: number, mean: number): number | null {
  return mean > 0 ? factorial2 / (mean * mean) : null;
}

const TOO_MANY = 'six factorial moments are not enough: too many photons per pulse';

function notesOf({ filtered, signal, emitted }: Sample, remarks: readonly string[]): Note[] {
  const notes: Note[] = [];
  if (filtered && filtered.multiphoton === null) {
    notes.push({ path: 'filtered.multiphoton', reason: TOO_MANY });
  }
  if (signal.multiphoton === null) notes.push({ path: 'signal.multiphoton', reason: TOO_MANY });
  if (emitted.mean <= 0) notes.push({ path: 'emitted.g2', reason: 'nothing is emitted' });
  for (const reason of remarks.slice(0, MOST_REMARKS)) notes.push({ path: 'phonons', reason });
  return notes;
}

/** Spelled out: spreads of objects are among the dearest things that a cheap evaluation could do. */
function figureTree(
  s: Sample,
  phonons: FigureTree['phonons'],
  accuracy: FigureTree['accuracy'],
  remarks: readonly string[],
  quantile: QuantileFigures | null,
): DriftTree {
  const { emitted, filtered, signal, collected } = s;
  return {
    emitted: {
      mean: emitted.mean,
      factorial2: emitted.factorial2,
      g2: ratio(emitted.factorial2, emitted.mean),
      p: emitted.p,
      multiphoton: emitted.multiphoton,
    },
    filtered: filtered && {
      mean: filtered.mean,
      factorial2: filtered.factorial2,
      g2: ratio(filtered.factorial2, filtered.mean),
      p: filtered.p,
      multiphoton: filtered.multiphoton,
    },
    signal: {
      mean: signal.mean,
      single: signal.single,
      any: anyOf(signal),
      multiphoton: signal.multiphoton,
      g2: ratio(signal.factorial2, signal.mean),
    },
    collected: {
      mean: collected.mean,
      single: collected.single,
      any: anyOf(collected),
      multiphoton: collected.multiphoton,
      g2: ratio(collected.factorial2, collected.mean),
      leakage: s.leakage,
    },
    populations: s.populations,
    pulse: s.pulse,
    phonons,
    accuracy,
    notes: notesOf(s, remarks),
    quantile,
  };
}

/** The tree with what it would be without drift (its quantiles left out); null without drift. */
export function withNominal(tree: DriftTree, still: DriftTree | null): Figures {
  return {
    emitted: tree.emitted,
    filtered: tree.filtered,
    signal: tree.signal,
    collected: tree.collected,
    populations: tree.populations,
    pulse: tree.pulse,
    phonons: tree.phonons,
    accuracy: tree.accuracy,
    notes: tree.notes,
    quantile: tree.quantile,
    nominal: still && withoutQuantile(still),
  };
}

function withoutQuantile({ quantile: _none, ...tree }: DriftTree): FigureTree {
  return tree;
}
