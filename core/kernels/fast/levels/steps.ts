import type { Problem } from './run.js';
import type { Source } from './table.js';

/**
 * Steps per ps of the first run: the envelope (a Gaussian one, or one with slower tails), the Rabi frequency, and whatever
 * turns. Fitted to some hundred random pulses, so that two or three runs mostly do.
 */
const RATE = { gaussian: 1.2, other: 2.4, rabi: 0.1, turning: 0.25 };
/** Behind a filter small moments are left of large ones, and need finer steps. */
const FILTERED = 1.4;
/** Rotations of more than a ladder are of lower order. */
const GENERAL = 1.3;
/** Share of the frequency range of a chirped tone that counts: where it is strong, it does not reach far. */
const CHIRP = 0.5;
/** Largest ‖hK‖ of the first run. */
const RESOLVED = 4;
/** First guesses above which the reference is taken to be as fast: not measured. */
const MOST = { emitted: 6000, filtered: 1500 };

/** First guess of the steps per span (0 for gaps), or null where other ways are as fast. */
export function firstCounts(problem: Problem): number[] | null {
  const { request, spans, layout, ladder, sources } = problem;
  const { scales, gaussians } = request.drive;
  const strength = Math.max(...request.scheme.transitions.map((t) => Math.hypot(t.weightH, t.weightV)));
  const rabi = scales.peakRabi * strength;
  const scale = (request.filter ? FILTERED : 1) * (ladder ? 1 : GENERAL);
  const counts = spans.map((span, s) => {
    if (span.gap) return 0;
    const turning = ladder ? turningOf(problem, sources[s]) : spreadOf(problem.energies) + scales.frequency;
    const rate = Math.max(
      scale *
        ((gaussians ? RATE.gaussian : RATE.other) / scales.time +
          RATE.rabi * rabi +
          RATE.turning * Math.hypot(2 * rabi, turning)),
      layout.kick.norm / RESOLVED,
    );
    return Math.max(12, Math.ceil((span.end - span.start) * rate));
  });
  const most = request.filter ? MOST.filtered : MOST.emitted;
  return counts.reduce((a, b) => a + b, 0) > most ? null : counts;
}

const spreadOf = (values: readonly number[]): number => Math.max(...values) - Math.min(...values);

/** Fastest turning in the frame of a span's source, 1/ps. */
function turningOf({ energies, ladder, request }: Problem, { frame, tones }: Source): number {
  const seen = (ladder?.levels ?? []).map((i, k) => energies[i] + k * frame.rate);
  const own = (tones ?? []).reduce(
    (most, t) => Math.max(most, Math.abs(t.rate) + (CHIRP * Math.abs(t.chirp)) / Math.sqrt(t.fall)),
    0,
  );
  const widest = (tones ?? []).reduce((most, t) => Math.max(most, 1 / Math.sqrt(t.fall)), 0);
  const chirped = tones ? 2 * CHIRP * Math.abs(frame.chirp) * widest : CHIRP * request.drive.scales.frequency;
  return spreadOf(seen) + own + chirped;
}
