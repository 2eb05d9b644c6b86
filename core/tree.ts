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
  const samples = runs.map((r) => r.sample);
  const mean = weightedMean(
    samples,
    nodes.map((n) => n.weight),
  );
  const { method } = runs[0].phonons;
  const flags = [...new Set(runs.flatMap((r) => r.phonons.flags))];
  const tree = figureTree(
    mean,
    { method, flags },
    {
      steps: runs.reduce((s, r) => s + r.steps, 0),
      error_estimate: runs.reduce((m, r) => Math.max(m, r.error), 0),
    },
  );
  const share = design.drift?.quantile ?? null;
  const remarks = [...new Set(runs.flatMap((r) => r.remarks))].slice(0, MOST_REMARKS);
  const notes = [...tree.notes, ...remarks.map((reason) => ({ path: 'phonons', reason }))];
  return { ...tree, notes, quantile: share === null ? null : quantileFigures(samples, axes, share) };
}

/** Brightness that a share of the drift reaches, and impurity that it does not exceed. */
function quantileFigures(samples: readonly Sample[], axes: DriftAxes, share: number): QuantileFigures {
  const over = (of: (s: Sample) => number | null, below: number): number | null => {
    const values = samples.map(of);
    return values.includes(null)
      ? null
      : driftQuantiles(axes, [{ values: values as number[], share: below }])[0];
  };
  return {
    share,
    signal: {
      single: over((s) => s.signal.single, 1 - share),
      any: over((s) => anyOf(s.signal), 1 - share),
      mean: over((s) => s.signal.mean, 1 - share),
    },
    collected: {
      multiphoton: over((s) => s.collected.multiphoton, share),
      g2: over((s) => ratio(s.collected.factorial2, s.collected.mean), share),
    },
  };
}

const anyOf = (c: Sample['signal']): number | null =>
  c.single === null || c.multiphoton === null ? null : c.single + c.multiphoton;

function ratio(factorial2: number, mean: number): number | null {
  return mean > 0 ? factorial2 / (mean * mean) : null;
}

function figureTree(s: Sample, phonons: FigureTree['phonons'], accuracy: FigureTree['accuracy']): FigureTree {
  const notes: Note[] = [];
  if (s.filtered && s.filtered.multiphoton === null) {
    notes.push({
      path: 'filtered.multiphoton',
      reason: 'six factorial moments are not enough: too many photons per pulse',
    });
  }
  if (s.signal.multiphoton === null) {
    notes.push({
      path: 'signal.multiphoton',
      reason: 'six factorial moments are not enough: too many photons per pulse',
    });
  }
  if (!(s.emitted.mean > 0)) notes.push({ path: 'emitted.g2', reason: 'nothing is emitted' });
  const count = (c: Sample['signal']) => ({
    mean: c.mean,
    single: c.single,
    any: anyOf(c),
    multiphoton: c.multiphoton,
    g2: ratio(c.factorial2, c.mean),
  });
  return {
    emitted: {
      mean: s.emitted.mean,
      factorial2: s.emitted.factorial2,
      g2: ratio(s.emitted.factorial2, s.emitted.mean),
      p: s.emitted.p,
      multiphoton: s.emitted.multiphoton,
    },
    filtered: s.filtered && {
      mean: s.filtered.mean,
      factorial2: s.filtered.factorial2,
      g2: ratio(s.filtered.factorial2, s.filtered.mean),
      p: s.filtered.p,
      multiphoton: s.filtered.multiphoton,
    },
    signal: count(s.signal),
    collected: { ...count(s.collected), leakage: s.leakage },
    populations: s.populations,
    pulse: s.pulse,
    phonons,
    accuracy,
    notes,
  };
}
