import type { CountResult } from '../count.js';
import { EXCITED, FIGURES, GROUND, named } from './bloch/figures.js';
import { prepare } from './bloch/problem.js';
import { runBloch } from './bloch/run.js';
import { settle } from './bloch/settle.js';
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
    const model = asTwoLevel(request);
    const spans = smoothSpans(request.drive);
    if (!model || !spans) return null;
    const { parts, tolerance } = request.effort;
    const problem = prepare(request, model, spans);
    const settled = settle(problem, tolerance * ACCEPT);
    if (!settled) return null;
    const { figures, counts, error } = settled;
    if (parts === 1) return resultOf(figures, counts, error);
    const cut = counts.map((n) => n * parts);
    const finer = new Float64Array(FIGURES);
    runBloch(problem, cut, finer);
    return resultOf(finer, cut, error);
  },
};

/** Accepted error of a run, in units of the effort's tolerance per step. */
const ACCEPT = 10;

function resultOf(figures: Float64Array, counts: readonly number[], error: number): CountResult {
  return {
    values: named(figures),
    populations: [figures[GROUND], figures[EXCITED]],
    steps: counts.reduce((a, b) => a + b, 0),
    localErrors: error,
  };
}
