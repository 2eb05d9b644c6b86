import type { EvaluatedPoint, FoundPoint, SearchOutcome } from '../../optimizers/index.js';
import type { Study } from '../study/index.js';
import type { Explanation } from './explain/explanation.js';

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
export interface FrontDesign extends FoundPoint {
  /** Highest brightness level asked for that this design serves. */
  readonly level: number;
  /** Bound of the third axis within which it does; null for none. A design may stand in several slices. */
  readonly slice: number | null;
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
  readonly outcome: Pick<SearchOutcome, 'evaluations' | 'hypervolume' | 'stages' | 'front' | 'correction'>;
  /** How the front was found, as it stands in front.json; null where there is nothing to tell. */
  readonly explanation: Explanation | null;
  /** Wall time of the search, all sessions together, s. */
  readonly wall: number;
}
