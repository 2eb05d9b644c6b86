import type { Problem } from './run.js';

/** Steps per ps of the first run: resolves the envelope, the Rabi frequency, the energies and the kicks. */
const RATE = { envelope: 1.4, rabi: 0.1, turning: 0.25 };
/** Largest ‖hK‖ of the first run. */
const RESOLVED = 4;
/** First guesses above which the reference was measured to be as fast. */
const MOST = 6000;

/** First guess of the steps per span (0 for gaps), or null where other ways are as fast. */
export function firstCounts(problem: Problem): number[] | null {
  const { request, spans, layout, energies } = problem;
  const { peakRabi, frequency, time } = request.drive.scales;
  const strength = Math.max(...request.scheme.transitions.map((t) => Math.hypot(t.weightH, t.weightV)));
  const rabi = peakRabi * strength;
  const spread = Math.max(...energies) - Math.min(...energies);
  const rate = Math.max(
    RATE.envelope / time + RATE.rabi * rabi + RATE.turning * Math.hypot(2 * rabi, spread + frequency),
    layout.kick.norm / RESOLVED,
  );
  const counts = spans.map((s) => (s.gap ? 0 : Math.max(8, Math.ceil((s.end - s.start) * rate))));
  return counts.reduce((a, b) => a + b, 0) > MOST ? null : counts;
}
