import { formulaOf, type Scalar } from './derivatives/formula.js';
import type { Design } from './design.js';
import { type Accuracy, checkSupport, driftGrid, evaluate, isExact, SEARCH } from './evaluate.js';
import type { Figures } from './figures.js';
import { PropagationError } from './kernels/count.js';
import { type NodeTask, sampleAll } from './run.js';
import type { SampleRun } from './sample.js';
import { type DriftTree, treeOf, withNominal } from './tree.js';
import { ALL_FIGURES, WantedFigures } from './wanted.js';

/**
 * Figures of many designs: those of `evaluate`, counted together where that is cheaper.
 * @param wanted paths of the figures that are needed, null for all. Others may come out as NaN or null, without a note,
 * and `nominal` as null: such trees are to be judged, not to be kept. Only the accuracy of a search makes use of it.
 * @returns one answer per design; null where the propagation cannot be carried out
 */
export function evaluateMany(
  designs: readonly Design[],
  accuracy: Accuracy,
  wanted: readonly string[] | null = null,
): (Figures | null)[] {
  designs.forEach(checkSupport);
  if (accuracy !== 'search' || designs.some(isExact))
    return designs.map((design) => attempt(() => evaluate(design, accuracy)));
  const needs = needsOf(wanted);
  const tasks: NodeTask[] = [];
  const grids = designs.map((design) => attempt(() => placeGrids(design, needs, tasks)));
  const runs = sampleAll(tasks, SEARCH);
  return grids.map((grid) => {
    if (grid === null) return null;
    const tree = treeAt(grid.drifting, runs);
    if (grid.still === null) return tree && withNominal(tree, null);
    const still = treeAt(grid.still, runs);
    return tree && still && withNominal(tree, still);
  });
}

/** Where the nodes of a mean stand among the tasks. */
interface PlacedGrid extends ReturnType<typeof driftGrid> {
  readonly first: number;
  readonly design: Design;
}

/** What begins the path of a figure without drift, and over a share of the drift. */
const NOMINAL = 'nominal.';
const QUANTILE = 'quantile.';
/** What quantiles are made of. */
const QUANTILE_SCALARS = [
  'signal.single',
  'signal.multiphoton',
  'signal.mean',
  'collected.mean',
  'collected.multiphoton',
  'collected.factorial2',
];

function scalarsOf(figure: string): readonly Scalar[] {
  if (figure.startsWith(QUANTILE)) return QUANTILE_SCALARS;
  if (figure.startsWith('populations.')) return [figure];
  return formulaOf(figure)?.scalars ?? [];
}

/** What is wanted of the mean over drift, and of the design without; null for nothing of the latter. */
function needsOf(wanted: readonly string[] | null): { drifting: WantedFigures; still: WantedFigures | null } {
  if (wanted === null) return { drifting: ALL_FIGURES, still: ALL_FIGURES };
  const nominal = wanted.filter((path) => path.startsWith(NOMINAL)).map((path) => path.slice(NOMINAL.length));
  return { drifting: figuresNeed(wanted), still: nominal.length > 0 ? figuresNeed(nominal) : null };
}

const figuresNeed = (figures: readonly string[]): WantedFigures =>
  new WantedFigures(new Set(figures.flatMap(scalarsOf)));

/** Adds the tasks of a design: those of its mean over drift and, with drift, of the design without. */
function placeGrids(
  design: Design,
  { drifting, still }: ReturnType<typeof needsOf>,
  tasks: NodeTask[],
): { readonly drifting: PlacedGrid; readonly still: PlacedGrid | null } {
  const place = (at: Design, wanted: WantedFigures): PlacedGrid => {
    const grid = driftGrid(at, SEARCH);
    const first = tasks.length;
    for (const node of grid.nodes) tasks.push({ nominal: at, node, wanted });
    return { ...grid, first, design: at };
  };
  const without = design.drift !== null && still !== null;
  return {
    drifting: place(design, drifting),
    still: without ? place({ ...design, drift: null }, still) : null,
  };
}

/** The tree at a grid; null where any of its nodes failed. */
function treeAt(
  { design, axes, nodes, first }: PlacedGrid,
  runs: readonly (SampleRun | PropagationError)[],
): DriftTree | null {
  const own = runs.slice(first, first + nodes.length);
  const good = own.filter((run): run is SampleRun => !(run instanceof PropagationError));
  return good.length === own.length ? treeOf(design, axes, nodes, good) : null;
}

function attempt<T>(work: () => T): T | null {
  try {
    return work();
  } catch (error) {
    if (error instanceof PropagationError) return null;
    throw error;
  }
}
