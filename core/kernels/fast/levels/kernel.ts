import type { CountRequest } from '../../count.js';
import type { FastKernel } from '../contract.js';
import { smoothSpans } from '../spans.js';
import { withArena } from './arena.js';
import { darkStaysDark, differentiate } from './gradient.js';
import { refine, refineShared, type Series } from './refine.js';
import { type Problem, problemOf, type Run, run, tablesOf } from './run.js';
import { firstCounts } from './steps.js';

/**
 * More than two levels, by exact rotations and exact kicks (layout.ts) on uniform steps. To first order in the kicks the
 * sum over steps is spectrally accurate, because the kicks act on a function that is constant where the drive has faded.
 * To second order it has an Euler–Maclaurin series in even powers of the step: h² is closed, the double commutator of
 * Takahashi & Imada (J. Phys. Soc. Jpn. 53, 3765 (1984)), and h⁴ is taken out by two runs.
 */
export const levels: FastKernel = {
  name: 'levels',
  supports: (request) => request.scheme.levels.length > 2,
  count(request, countPart) {
    const own = withArena(() => solve(request, false)?.series.result ?? null);
    if (!own || !request.filter) return own;
    // Light before the filter does not see it: the cheaper problem has its own steps.
    const emitted = countPart({ ...request, filter: null });
    return {
      values: { ...emitted.values, ...own.values },
      populations: emitted.populations,
      steps: own.steps + emitted.steps,
      localErrors: Math.max(own.localErrors, emitted.localErrors),
    };
  },
  countWithGradient(request, seeds) {
    return withArena(() => {
      const solved = solve(request, true);
      return solved && differentiate(solved.problem, solved.series, seeds);
    });
  },
};

/** Accepted error in units of the effort's tolerance per step. */
const ACCEPT = 4;

interface Solved {
  readonly problem: Problem;
  readonly series: Series<Run>;
}

/** A sixth of a shared table's steps over the steps of a first run by itself. */
const SHARE = 0.345;

function tabulate(problem: Problem, counts: readonly number[]) {
  const tables = tablesOf(problem, counts);
  return { tables, error: tables.reduce((sum, table) => sum + (table?.error() ?? 0), 0) };
}

function solve(request: CountRequest, keep: boolean): Solved | null {
  const spans = smoothSpans(request.drive);
  if (!spans) return null;
  const problem = problemOf(request, spans, usedComponents(request));
  if (keep && !darkStaysDark(problem)) return null;
  const counts = firstCounts(problem);
  if (!counts) return null;
  const { tolerance, parts } = request.effort;
  const accept = tolerance * ACCEPT;
  // Behind a filter the kicks need steps that are fine enough for the rotations, which then cost little.
  const series =
    request.filter || !problem.ladder
      ? refine(counts, accept, (steps) => run(problem, steps, keep), parts)
      : refineShared(
          counts.map((n) => Math.ceil(n * SHARE)),
          accept,
          (steps) => tabulate(problem, steps),
          (steps, tables) =>
            run(problem, steps, keep && steps.every((n, s) => n === (tables[s]?.count ?? n)), tables),
          parts,
        );
  return series && { problem, series };
}

const PROBES = 8;

/** Drive components that ever differ from zero: the weight of a tone is exactly zero or it is not. */
export function usedComponents({ drive }: CountRequest): boolean[] {
  const { breakpoints, components, directions } = drive;
  const used = new Array<boolean>(components).fill(false);
  if (directions) return used.map((_, c) => directions.some((weights) => weights[c] !== 0));
  const out = new Float64Array(2 * components);
  for (let s = 0; s + 1 < breakpoints.length; s++) {
    for (let k = 0; k < PROBES; k++) {
      drive.sample(breakpoints[s] + ((k + 0.5) / PROBES) * (breakpoints[s + 1] - breakpoints[s]), s, out);
      for (let c = 0; c < components; c++) if (out[2 * c] !== 0 || out[2 * c + 1] !== 0) used[c] = true;
    }
  }
  return used;
}
