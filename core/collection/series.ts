import { countFromMoments, type SeriesRule, seriesError, seriesHolds } from './moments.js';

/** Fewest and most factorial moments behind a filter. */
export const FEWEST_MOMENTS = { bound: 4, estimate: 3 } as const;
const MOST_MOMENTS = 6;

/** What the moments found say: they suffice, or how many more would. */
export type SeriesOutcome =
  | { readonly kind: 'enough'; readonly error: number }
  | { readonly kind: 'more'; readonly order: number };

/** Whether a series of at least three moments is long enough for P(n≥2), or the highest order is reached; `error` is what it may leave. */
export function judgeSeries(moments: readonly number[], rule: SeriesRule): SeriesOutcome {
  const count = countFromMoments(moments, 1);
  if (seriesHolds(count, rule)) return { kind: 'enough', error: seriesError(count, rule) };
  if (moments.length >= MOST_MOMENTS) return { kind: 'enough', error: 0 };
  return { kind: 'more', order: nextOrder(moments, rule) };
}

export const momentsOf = (values: Readonly<Record<string, number>>, order: number): number[] =>
  Array.from({ length: order }, (_, k) => values[`m${k + 1}`]);

/** The shortest series that should hold if the moments go on falling as they last did. */
function nextOrder(moments: readonly number[], rule: SeriesRule): number {
  const extended = [...moments];
  const ratio = moments[moments.length - 1] / moments[moments.length - 2];
  while (extended.length < MOST_MOMENTS) {
    extended.push(extended[extended.length - 1] * ratio);
    if (seriesHolds(countFromMoments(extended, 1), rule)) break;
  }
  return extended.length;
}
