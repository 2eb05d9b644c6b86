import { exactQuantity, parseQuantity } from '../../core/index.js';
import { dimensionAt, quantityPaths } from '../run/parameters.js';
import { UserError } from '../run/user-error.js';
import { fullPath } from '../study/index.js';
import { nearestName } from '../study/nearest.js';

/** One scanned parameter. */
export interface Over {
  readonly path: string;
  /** In order, internal units; ascending unless it goes together with another. */
  readonly values: readonly number[];
  /** The same as study text that reads back to the same numbers. */
  readonly texts: readonly string[];
  readonly log: boolean;
}

const FORM = 'path=from..to:count, such as "pulse.tones.0.area=0 pi..4 pi:81" (":81:log" for even ratios)';
const PATTERN = /^([^=]+)=(.+?)\.\.(?!\.)(.+):(\d{1,9})(:log)?$/;
const MOST_VALUES = 100_000;

function pathOf(text: string, tones: number): string {
  const path = fullPath(text.trim());
  const known = quantityPaths(tones);
  if (known.includes(path)) return path;
  const near = nearestName(path, known);
  throw new UserError(
    `--over: got the path ${path}; needs one at which a quantity of this study stands${near === null ? '' : `; nearest: ${near}`}`,
  );
}

/**
 * Reads one `--over`.
 * @param tones number of tones of the study
 * @param downward whether the range may also fall
 */
export function parseOver(text: string, tones: number, downward = false): Over {
  const match = PATTERN.exec(text.trim());
  if (!match) throw new UserError(`--over: got "${text}"; needs ${FORM}`);
  const path = pathOf(match[1], tones);
  const dimension = dimensionAt(path)!;
  const end = (part: string): number => {
    const parsed = parseQuantity(part, dimension);
    if (parsed.kind === 'fault') {
      throw new UserError(`--over ${path}: got ${parsed.found}; needs ${parsed.wanted}`);
    }
    return parsed.value;
  };
  const [from, to, count] = [end(match[2]), end(match[3]), Number(match[4])];
  const log = match[5] !== undefined;
  if (count < 2 || count > MOST_VALUES) {
    throw new UserError(`--over ${path}: got ${count} values; needs 2 to ${MOST_VALUES}`);
  }
  if (!(from < to) && !(downward && from > to)) {
    const wanted = downward ? 'two different ends' : 'from below to';
    throw new UserError(`--over ${path}: got ${match[2]}..${match[3]}; needs ${wanted}`);
  }
  if (log && !(Math.min(from, to) > 0))
    throw new UserError(`--over ${path}: got ${from > to ? match[3] : match[2]} with log; needs more than 0`);
  const values = Array.from({ length: count }, (_, i) => {
    if (i === count - 1) return to;
    const share = i / (count - 1);
    return log ? from * (to / from) ** share : from + (to - from) * share;
  });
  return { path, values, log, texts: values.map((value) => exactQuantity(value, dimension)) };
}
