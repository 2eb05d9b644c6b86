import type { CountRequest, CountResult, Effort } from '../count.js';
import { EXCITED, FIGURES, GROUND, named } from './bloch/figures.js';
import { differentiableCounts, differentiate } from './bloch/gradient.js';
import { type BlochProblem, prepare } from './bloch/problem.js';
import { runBloch } from './bloch/run.js';
import { type Settled, settle, total } from './bloch/settle.js';
import { MOST_RECORDED } from './bloch/steps.js';
import { Tape } from './bloch/tape.js';
import type { FastKernel } from './contract.js';
import { smoothSpans } from './spans.js';
import { asTwoLevel } from './two-level.js';

/**
 * Emitted light of two levels. Per step the drive is one rotation of the Bloch vectors of all counting operators;
 * between steps stands the exact effect of decay, dephasing and counted jumps over one step (a "kick"). To first order
 * in the rates this is a sum over uniform steps of a smooth function that is constant at both ends, so its error
 * is spectrally small. To second order the sum has an Euler–Maclaurin series, whose h² and h⁴ terms are closed (the
 * first is the double commutator of Takahashi & Imada, J. Phys. Soc. Jpn. 53, 3765 (1984)) and are taken out.
 * The counting operators are kept in the picture that rotates with the drive, where they change by kicks alone.
 */
export const twoLevelEmitted: FastKernel = {
  name: 'two-level emitted',
  supports: (request) => request.filter === null && asTwoLevel(request) !== null,
  count(request) {
    const problem = problemOf(request);
    const run = problem && runOf(problem, request.effort, null);
    return run && resultOf(run);
  },
  countWithGradient(request, seeds) {
    const problem = problemOf(request);
    const tape = new Tape();
    const run = problem && runOf(problem, request.effort, tape);
    const counts = run && differentiableCounts(problem, run.counts);
    if (!counts || total(counts) > MOST_RECORDED) return null;
    const result = resultOf(run);
    if (total(counts) > result.steps) runBloch(problem, counts, new Float64Array(FIGURES), tape);
    const gradient = differentiate(problem, tape, seeds(result.values));
    return gradient && { result, ...gradient };
  },
};

/** Accepted error of a run, in units of the effort's tolerance per step: a fifth is left for what the estimate misses. */
const ACCEPT = 8;

function problemOf(request: CountRequest): BlochProblem | null {
  const model = asTwoLevel(request);
  const spans = model && smoothSpans(request.drive);
  return spans && prepare(request, model, spans);
}

function runOf(problem: BlochProblem, { parts, tolerance }: Effort, tape: Tape | null): Settled | null {
  const settled = settle(problem, tolerance * ACCEPT, tape);
  if (!settled || parts === 1) return settled;
  const counts = settled.counts.map((n) => n * parts);
  const figures = new Float64Array(FIGURES);
  runBloch(problem, counts, figures, tape);
  return { figures, counts, error: settled.error };
}

function resultOf({ figures, counts, error }: Settled): CountResult {
  return {
    values: named(figures),
    populations: [figures[GROUND], figures[EXCITED]],
    steps: total(counts),
    localErrors: error,
  };
}
