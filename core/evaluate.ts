import { figureDifference, relativeDifference } from './accuracy.js';
import type { Design, PhononSpec } from './design.js';
import { type DriftAxes, type DriftNode, driftAxes, driftNodes } from './drift/nodes.js';
import type { Figures, Note } from './figures.js';
import type { Effort } from './kernels/count.js';
import { phononRangeProblem } from './phonons/count.js';
import { pulseFigures } from './pulse/figures.js';
import { orThrow, sampleAll } from './run.js';
import { asPropagation, hasPhonons } from './situation.js';
import { type DriftTree, treeOf, withNominal } from './tree.js';

/**
 * `search`: one propagation, error estimated from its own steps. `quoted`: repeated with finer steps and more drift
 * nodes until two runs agree to the promised accuracy; the estimate is their difference. `verified`: with phonons the
 * exact method, whatever the design names; without, the reference propagator alone, twice, finer than `quoted`.
 */
export type Accuracy = 'search' | 'quoted' | 'verified';

export const SEARCH: Effort = { tolerance: 1e-10, parts: 1, nodes: 1, series: 'estimate' };
const LADDER: readonly Effort[] = [
  { tolerance: 1e-10, parts: 1, nodes: 1, series: 'bound' },
  { tolerance: 1e-10, parts: 2, nodes: 1, series: 'bound' },
  { tolerance: 1e-11, parts: 4, nodes: 1, series: 'bound' },
  { tolerance: 1e-11, parts: 8, nodes: 1, series: 'bound' },
];
/** Multiples of the drift nodes that a search takes. */
const NODE_EFFORTS = [1, 1.4, 2, 3];
/** By the reference alone: what a fast kernel got wrong would otherwise be wrong again. */
const VERIFICATION: readonly Effort[] = [
  { tolerance: 1e-11, parts: 2, nodes: 1, series: 'bound', kernel: 'reference' },
  { tolerance: 1e-11, parts: 4, nodes: 1, series: 'bound', kernel: 'reference' },
];
/** Promised accuracy in the measure of `FigureTree.accuracy.error_estimate`. */
export const PROMISED = 1e-6;

/**
 * Figures of a fixed design.
 * @throws PropagationError when the pulse is beyond what can be integrated
 */
export function evaluate(design: Design, accuracy: Accuracy): Figures {
  checkSupport(design);
  const wanted = accuracy === 'verified' ? withExactPhonons(design) : design;
  if (!wanted.drift) return withNominal(evaluateStill(wanted, accuracy).tree, null);
  const still = evaluateStill({ ...wanted, drift: null }, accuracy);
  return withNominal(evaluateDrifting(wanted, accuracy, still), still.tree);
}

/** The design with the exact phonon method; itself without phonons. */
export function withExactPhonons(design: Design): Design {
  return withPhononMethod(design, 'exact');
}

function withPhononMethod(design: Design, method: PhononSpec['method']): Design {
  const { phonons } = design.emitter;
  if (phonons === null) return design;
  return { ...design, emitter: { ...design.emitter, phonons: { ...phonons, method } } };
}

/** Throws UnsupportedDesign where this version has no method for the design; evaluates nothing. */
export function checkSupport(design: Design): void {
  const { phonons } = design.emitter;
  const problem = phonons && hasPhonons(design) ? phononRangeProblem(phonons) : null;
  if (problem !== null) throw new UnsupportedDesign(problem);
  if (design.pulse.tones.length === 0) throw new UnsupportedDesign('a pulse needs at least one tone');
}

/** A valid design that this version cannot evaluate; the message says what to change. */
export class UnsupportedDesign extends Error {
  override readonly name = 'UnsupportedDesign';
}

/** A design without drift, and the effort that was enough for it. */
interface Still {
  readonly tree: DriftTree;
  readonly effort: Effort;
}

/**
 * The exact phonon method settles by its own size, to 1e-3; what finer steps and most drift nodes could add lies far
 * below that: half the nodes leave the square root of what all leave.
 */
const EXACT_NODES = [0.5, 0.7, 1];
const EXACT: Effort = { ...LADDER[0], nodes: EXACT_NODES[0] };
/** Relative error of means that too few nodes may leave beside the exact phonon method. */
const ENOUGH_FOR_EXACT = { quoted: 2e-4, verified: 2e-5 };

export const isExact = (design: Design): boolean =>
  hasPhonons(design) && design.emitter.phonons?.method === 'exact';

/** The one effort of an accuracy that does not compare two; null where two must agree. */
function singleEffort(design: Design, accuracy: Accuracy): Effort | null {
  if (accuracy === 'search') return isExact(design) ? { ...SEARCH, nodes: EXACT.nodes } : SEARCH;
  if (!isExact(design)) return null;
  return accuracy === 'verified' ? { ...EXACT, kernel: 'reference' } : EXACT;
}

function evaluateStill(design: Design, accuracy: Accuracy): Still {
  const effort = singleEffort(design, accuracy);
  if (effort) {
    const { tree, tower } = runOnce(design, effort);
    return { tree, effort: tower ? { ...effort, tower } : effort };
  }
  const { tree, estimate, enough } = climb(design, accuracy === 'verified' ? VERIFICATION : LADDER);
  return { tree: withEstimate(tree, estimate), effort: { ...enough, checked: true } };
}

/** Steps, and the size of a phonon hierarchy, are judged by the design without drift, which is evaluated anyway. */
function evaluateDrifting(design: Design, accuracy: Accuracy, still: Still): DriftTree {
  if (accuracy === 'search') return evaluateOnce(design, still.effort);
  if (isExact(design)) {
    const { nodes, error } = nodesForExact(design, ENOUGH_FOR_EXACT[accuracy]);
    const tree = evaluateOnce(design, { ...still.effort, nodes });
    const notes = [...tree.notes, ...still.tree.notes.filter(({ path }) => path === 'phonons')];
    const error_estimate = Math.max(tree.accuracy.error_estimate, error);
    return { ...tree, notes, accuracy: { ...tree.accuracy, error_estimate } };
  }
  return settleNodes(design, still.effort, still.tree.accuracy.error_estimate);
}

/** How many drift nodes suffice beside the exact phonon method, judged by a second-order one. */
function nodesForExact(design: Design, enough: number): { readonly nodes: number; readonly error: number } {
  const cheap = withPhononMethod(design, 'auto');
  const fine = evaluateOnce(cheap, { ...SEARCH, nodes: NODE_EFFORTS[1] });
  for (const nodes of EXACT_NODES) {
    const error = relativeDifference(evaluateOnce(cheap, { ...SEARCH, nodes }), fine);
    if (error <= enough || nodes === EXACT_NODES[EXACT_NODES.length - 1]) return { nodes, error };
  }
  throw new Error('no drift nodes to choose from');
}

/** Finer steps until two runs agree; `enough` is the coarser effort of the two, whose error the estimate bounds. */
function climb(
  design: Design,
  ladder: readonly Effort[],
): { tree: DriftTree; estimate: number; enough: Effort } {
  let coarse = evaluateOnce(design, ladder[0]);
  for (let rung = 1; ; rung++) {
    const tree = evaluateOnce(design, ladder[rung]);
    const estimate = Math.max(figureDifference(coarse, tree), tree.accuracy.error_estimate);
    if (estimate <= PROMISED || rung === ladder.length - 1)
      return { tree, estimate, enough: ladder[rung - 1] };
    coarse = tree;
  }
}

/** More drift nodes until two means agree. The steps were judged on the design without drift. */
function settleNodes(design: Design, effort: Effort, stepError: number): DriftTree {
  let coarse = evaluateOnce(design, { ...effort, nodes: NODE_EFFORTS[0] });
  for (let k = 1; ; k++) {
    const fine = evaluateOnce(design, { ...effort, nodes: NODE_EFFORTS[k] });
    const estimate = Math.max(figureDifference(coarse, fine), stepError, fine.accuracy.error_estimate);
    if (estimate <= PROMISED || k === NODE_EFFORTS.length - 1) return withEstimate(fine, estimate);
    coarse = fine;
  }
}

function withEstimate(tree: DriftTree, estimate: number): DriftTree {
  const notes: Note[] = [...tree.notes];
  if (estimate > PROMISED) {
    notes.push({
      path: 'accuracy',
      reason: `the promised accuracy was not reached: estimated error ${estimate.toExponential(1)}, promised ${PROMISED}`,
    });
  }
  return { ...tree, notes, accuracy: { ...tree.accuracy, error_estimate: estimate } };
}

const evaluateOnce = (design: Design, effort: Effort): DriftTree => runOnce(design, effort).tree;

/** @returns with the size that a phonon hierarchy settled at, where there is one */
function runOnce(
  design: Design,
  effort: Effort,
): { readonly tree: DriftTree; readonly tower: Effort['tower'] } {
  const { axes, nodes } = driftGrid(design, effort);
  const runs = sampleAll(
    nodes.map((node) => ({ nominal: design, node })),
    effort,
  ).map(orThrow);
  return { tree: treeOf(design, axes, nodes, runs), tower: runs[0].tower };
}

const DURATION = new Set(['duration_ps'] as const);

/** The nodes over which a design is averaged. */
export function driftGrid(
  design: Design,
  effort: Effort,
): { readonly axes: DriftAxes; readonly nodes: readonly DriftNode[] } {
  const duration = design.drift
    ? asPropagation(() => pulseFigures(design.pulse, null, null, DURATION)).duration_ps
    : 0;
  const axes = driftAxes(design, duration, effort.nodes);
  return { axes, nodes: driftNodes(design, axes) };
}
