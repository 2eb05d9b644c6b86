import type { Drive } from '../../../pulse/drive.js';
import type { GaussianTone } from '../../../pulse/gaussians.js';
import { type PhaseFrame, phaseAt, phaseFrame, seenFrom } from '../bloch/frame.js';
import { BLOCK, NODES, PLACES } from '../bloch/nodes.js';
import { addComplex } from '../bloch/table.js';
import type { Span } from '../spans.js';
import { take } from './arena.js';

/** The frame in which a span is propagated, and what the drive is there. */
export interface Source {
  readonly frame: PhaseFrame;
  /** As seen from the frame; null where the drive has to be sampled. */
  readonly tones: readonly GaussianTone[] | null;
}

const STILL: PhaseFrame = { origin: 0, constant: 0, rate: 0, chirp: 0 };

/** A tone this far down (e-folds) at the nearest end of a span is not part of it. */
const FADED = 45;

/** The frame in which one component of the drive turns least over a span. */
export function sourceOf(drive: Drive, component: number, span: Span, energy: number): Source {
  const { gaussians, directions } = drive;
  if (span.gap) return { frame: STILL, tones: null };
  if (!gaussians || !directions) return { frame: frameAtPeak(drive, component, span), tones: null };
  const acting = gaussians.flatMap((tone, k) => {
    const off = Math.max(0, span.start - tone.delay, tone.delay - span.end);
    const amplitude = tone.amplitude * directions[k][component];
    return amplitude !== 0 && tone.fall * off * off < FADED ? [{ ...tone, amplitude }] : [];
  });
  if (acting.length === 0) return { frame: STILL, tones: [] };
  const frame = phaseFrame(acting, energy);
  return { frame, tones: acting.map((tone) => seenFrom(frame, tone)) };
}

/** Turns with the phase of the drive where that is strongest. */
function frameAtPeak(drive: Drive, component: number, span: Span): PhaseFrame {
  const { frequency, time } = drive.scales;
  if (frequency === 0) return STILL;
  const within = drive.cells.filter((cell) => cell.segment >= span.first && cell.segment <= span.last);
  const peak = within.reduce((most, cell) => (cell.bound > most.bound ? cell : most));
  const t = 0.5 * (peak.from + peak.to);
  const d = Math.min(0.01 * time, 0.5 / frequency, 0.5 * (peak.to - peak.from));
  const before = new Float64Array(2 * drive.components);
  const after = new Float64Array(2 * drive.components);
  drive.sample(t - d, peak.segment, before);
  drive.sample(t + d, peak.segment, after);
  const [a, b] = before.subarray(2 * component);
  const [c, e] = after.subarray(2 * component);
  return { ...STILL, origin: t, rate: Math.atan2(e * a - c * b, c * a + e * b) / (2 * d) };
}

/** Re and Im of `scale`·Ω of one component in the source's frame at the nodes of every step: [8·step + 2·node]. */
export function nodeTable(
  drive: Drive,
  component: number,
  { frame, tones }: Source,
  span: Span,
  h: number,
  count: number,
  scale: number,
): Float64Array {
  const out = take(2 * NODES * count);
  if (tones) {
    const grid = { start: span.start, h };
    for (let from = 0; from < count; from += BLOCK) {
      for (const tone of tones) addComplex(tone, scale, grid, from, Math.min(count, from + BLOCK), out);
    }
    return out;
  }
  const value = new Float64Array(2 * drive.components);
  const { breakpoints } = drive;
  let segment = span.first;
  for (let n = 0; n < count; n++) {
    for (let j = 0; j < NODES; j++) {
      const t = span.start + (n + 0.5 + PLACES[j]) * h;
      while (segment < span.last && t >= breakpoints[segment + 1]) segment++;
      drive.sample(t, segment, value);
      const angle = -phaseAt(frame, t);
      const c = scale * Math.cos(angle);
      const s = scale * Math.sin(angle);
      const a = value[2 * component];
      const b = value[2 * component + 1];
      out[2 * (NODES * n + j)] = a * c - b * s;
      out[2 * (NODES * n + j) + 1] = a * s + b * c;
    }
  }
  return out;
}
