import type { StageReport } from '../../../optimizers/index.js';

/** Relative growth of the hypervolume; an estimate of what further evaluations would add. */
export interface Growth {
  /** Share of the final hypervolume that came in the second half of the evaluations, and in the quarter before it. */
  readonly lastHalf: number;
  readonly quarterBefore: number;
  /**
   * Estimated gain by as many evaluations again, as a share of the final hypervolume: the last doubling's gain times
   * its ratio to the doubling before, at most 1. An estimate: it cannot know of a branch that was never seen.
   */
  readonly byDoubling: number;
}

/** Fewer stages than this tell no trend. */
const FEWEST_STAGES = 4;

/** Hypervolume once `evaluations` were spent: of the last stage that was over by then. */
function volumeAt(stages: readonly StageReport[], evaluations: number): number {
  let spent = 0;
  let volume = 0;
  for (const stage of stages) {
    spent += stage.evaluations;
    if (spent > evaluations) break;
    volume = stage.hypervolume;
  }
  return volume;
}

/** How the hypervolume grew from stage to stage; null where that tells no trend. */
export function growthOf(stages: readonly StageReport[]): Growth | null {
  const total = stages.reduce((sum, { evaluations }) => sum + evaluations, 0);
  const final = volumeAt(stages, total);
  if (stages.length < FEWEST_STAGES || !(final > 0)) return null;
  const [quarter, half] = [volumeAt(stages, total / 4), volumeAt(stages, total / 2)];
  const [late, early] = [final - half, half - quarter];
  const ratio = early > 0 ? Math.min(1, late / early) : 1;
  return { lastHalf: late / final, quarterBefore: early / final, byDoubling: (late * ratio) / final };
}
