import type { StageReport } from '../../../optimizers/index.js';

/** Relative growth of the hypervolume; an estimate of what further evaluations would add. */
export interface Growth {
  /** Share of the final hypervolume that came in the second half of the evaluations, and in the quarter before it. */
  readonly lastHalf: number;
  readonly quarterBefore: number;
  /**
   * Estimated gain by as many evaluations again, as a share of the final hypervolume. Most: that of the last doubling
   * again; least: that times its ratio to the doubling before it, as if the growth went on to slow down like that. It
   * cannot know of a branch that was never seen. Null where the first half found nothing of the front.
   */
  readonly byDoubling: { readonly least: number; readonly most: number } | null;
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
export function growthOf(all: readonly StageReport[]): Growth | null {
  const stages = all.filter(({ corrects }) => !corrects);
  const total = stages.reduce((sum, { evaluations }) => sum + evaluations, 0);
  const final = volumeAt(stages, total);
  if (stages.length < FEWEST_STAGES || !(final > 0)) return null;
  const [quarter, half] = [volumeAt(stages, total / 4), volumeAt(stages, total / 2)];
  const [late, early] = [final - half, half - quarter];
  const ratio = early > 0 ? Math.min(1, late / early) : 1;
  const lastHalf = late / final;
  const byDoubling = half > 0 ? { least: lastHalf * ratio, most: lastHalf } : null;
  return { lastHalf, quarterBefore: early / final, byDoubling };
}
