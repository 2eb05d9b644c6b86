import { type Formula, formulaOf, identity } from './derivatives/formula.js';
import { differentiateNode, type NodeDerivatives } from './derivatives/node.js';
import { type ParameterSlot, parameterSlot } from './derivatives/parameters.js';
import { scalarOf } from './derivatives/scalar.js';
import type { Design } from './design.js';
import { weightedMean } from './drift/mean.js';
import { checkSupport, driftGrid, evaluate, SEARCH } from './evaluate.js';
import type { Figures } from './figures.js';
import { countWithGradient } from './kernels/differentiate.js';
import type { CountWithGradient } from './kernels/gradient.js';
import { hasPhonons } from './situation.js';
import { type DriftTree, treeOf, withNominal } from './tree.js';

/** Figures of a design with exact first derivatives. */
export interface FigureGradient {
  readonly figures: Figures;
  /**
   * One row per figure asked for: its derivative by each parameter, in the figure's unit over the design's internal
   * unit (design.ts). Null where no exact derivative exists for this design (an edge, a phonon method, a quantile, a
   * figure that is null): then differences must do.
   */
  readonly rows: readonly (readonly number[])[] | null;
}

/**
 * Value and derivatives at the accuracy of a search.
 * @param figures paths in the tree of figures, such as `collected.multiphoton`, `pulse.energy_pi_units`
 * @param parameters paths in the design, such as `pulse.tones.0.fwhm`, `collection.filter.center`
 */
export type EvaluateGradient = (
  design: Design,
  figures: readonly string[],
  parameters: readonly string[],
) => FigureGradient;

export const evaluateGradient: EvaluateGradient = (design, figures, parameters) =>
  differentiateBy(countWithGradient)(design, figures, parameters);

/** `evaluateGradient` on a kernel's derivatives. */
export const differentiateBy =
  (kernel: CountWithGradient): EvaluateGradient =>
  (design, figures, parameters) => {
    checkSupport(design);
    return (
      exactGradient(design, figures, parameters, kernel) ?? {
        figures: evaluate(design, 'search'),
        rows: null,
      }
    );
  };

/** What a path without drift begins with. */
const NOMINAL = 'nominal.';

function exactGradient(
  design: Design,
  figures: readonly string[],
  parameters: readonly string[],
  kernel: CountWithGradient,
): FigureGradient | null {
  const slots = parameters.map((path) => parameterSlot(design, path));
  if (hasPhonons(design) || !slots.every((slot) => slot !== null)) return null;
  const nominal = (path: string): boolean => design.drift !== null && path.startsWith(NOMINAL);
  const outer = figures.filter((path) => !nominal(path)).map(formulaOf);
  const inner = figures.filter(nominal).map((path) => formulaOf(path.slice(NOMINAL.length)));
  if (!outer.every((f) => f !== null) || !inner.every((f) => f !== null)) return null;
  const drifting = differentiateMean(design, outer, slots, kernel);
  if (drifting === null) return null;
  if (design.drift === null) return { figures: withNominal(drifting.tree, null), rows: drifting.rows };
  const nominalDesign = { ...design, drift: null };
  if (inner.length === 0) {
    // Nothing of the nominal figures is to be differentiated, so they are only evaluated.
    const { nominal: _none, ...tree } = evaluate(nominalDesign, 'search');
    return { figures: withNominal(drifting.tree, tree), rows: drifting.rows };
  }
  const still = differentiateMean(nominalDesign, inner, slots, kernel);
  if (still === null) return null;
  const rows = [drifting.rows.values(), still.rows.values()];
  return {
    figures: withNominal(drifting.tree, still.tree),
    rows: figures.map((path) => rows[nominal(path) ? 1 : 0].next().value as number[]),
  };
}

/** Figures of the mean over a design's drift with the rows of the formulas. */
function differentiateMean(
  design: Design,
  formulas: readonly Formula[],
  slots: readonly ParameterSlot[],
  kernel: CountWithGradient,
): { readonly tree: DriftTree; readonly rows: number[][] } | null {
  const { axes, nodes } = driftGrid(design, SEARCH);
  // Ratios are made of means: over several nodes what is averaged is differentiated first.
  const single = nodes.length === 1;
  const scalars = [...new Set(formulas.flatMap((f) => f.scalars))];
  const perNode = single ? formulas : scalars.map(identity);
  const runs: NodeDerivatives[] = [];
  for (const node of nodes) {
    const run = differentiateNode(design, node, perNode, SEARCH, kernel);
    if (run === null) return null;
    runs.push(run);
  }
  const weights = nodes.map((n) => n.weight);
  const means = perNode.map((_, i) =>
    combined(
      runs.map(({ rows }) => rows[i]),
      weights,
    ),
  );
  const tree = treeOf(design, axes, nodes, runs.map(runOf));
  const pick = (row: Float64Array) => slots.map(({ slot, factor }) => factor * row[slot]);
  if (single) return { tree, rows: means.map(pick) };
  const sample = weightedMean(
    runs.map((r) => r.sample),
    weights,
  );
  const rows: number[][] = [];
  for (const formula of formulas) {
    const terms = formula.terms((scalar) => scalarOf(sample, scalar));
    if (terms === null) return null;
    const rowsOf = terms.map(([scalar]) => means[scalars.indexOf(scalar)]);
    const coefficients = terms.map(([, coefficient]) => coefficient);
    rows.push(pick(combined(rowsOf, coefficients)));
  }
  return { tree, rows };
}

/** Σ factor · row. */
function combined(rows: readonly Float64Array[], factors: readonly number[]): Float64Array {
  return rows[0].map((_, i) => rows.reduce((sum, row, k) => sum + factors[k] * row[i], 0));
}

const runOf = ({ sample, steps, error }: NodeDerivatives) => ({
  sample,
  steps,
  error,
  phonons: { method: 'none' as const, flags: [] },
  remarks: [],
});
