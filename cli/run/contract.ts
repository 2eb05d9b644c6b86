import type { EvaluatedPoint, SearchOutcome } from '../../optimizers/index.js';
import type { Study } from '../study/index.js';

export const FRONT_FORMAT = 'pulsewright.front/1';
export const ARCHIVE_FORMAT = 'pulsewright.archive/1';

/** What the files of a run say they belong to. */
export interface RunIdentity {
  readonly study: Study;
  /** Hash of the study. */
  readonly hash: string;
  /** Version of the package. */
  readonly version: string;
}

/** A point of the front, evaluated anew at accuracy `quoted`. */
export interface FrontDesign extends EvaluatedPoint {
  /** Highest brightness level asked for that this design serves. */
  readonly level: number;
  /** Its file, relative to the run directory. */
  readonly file: string;
}

/** Everything that a finished run writes besides the ledger. */
export interface RunResult extends RunIdentity {
  readonly front: readonly FrontDesign[];
  /** The design at `goal.at_least`; null when none is set or it is out of reach. */
  readonly best: FrontDesign | null;
  /** Brightness levels asked for that no design reaches. */
  readonly outOfReach: readonly number[];
  /** Where no evaluation met the limits of the goal: the nearest one, evaluated anew. */
  readonly nearest: EvaluatedPoint | null;
  readonly archive: readonly EvaluatedPoint[];
  readonly outcome: Pick<SearchOutcome, 'evaluations' | 'hypervolume' | 'stages'>;
  /** Wall time of the search, all sessions together, s. */
  readonly wall: number;
}
