import type { Drive } from '../../pulse/drive.js';
import type { Span } from './spans.js';

/**
 * Steps per ps for the coherent motion. Where the phase can be followed, a chirp matters little beyond the detuning at the
 * strongest moment; else everything that turns must be resolved.
 * @param energy of the upper level in the drive's frame, 1/ps
 */
export function coherentRate(drive: Drive, rabi: number, energy: number, smooth: boolean): number {
  const { frequency, time } = drive.scales;
  if (!smooth) return 1.4 / time + 1.4 * rabi + 1.2 * Math.hypot(rabi, Math.abs(energy) + frequency);
  const turning = frequency > 0 ? rateAtPeak(drive) : 0;
  const chirp = Math.max(0, frequency - Math.abs(turning));
  return 1.4 / time + 0.3 * rabi + 0.4 * Math.hypot(rabi, energy + turning) + 0.15 * chirp;
}

/** Rate of the drive's phase where it is strongest, 1/ps. */
function rateAtPeak(drive: Drive): number {
  const { frequency, time } = drive.scales;
  let peak = drive.cells[0];
  for (const cell of drive.cells) if (cell.bound > peak.bound) peak = cell;
  const t = 0.5 * (peak.from + peak.to);
  const d = Math.min(0.01 * time, 0.5 / frequency);
  const out = new Float64Array(2 * drive.components);
  drive.sample(t, peak.segment, out);
  const [a, b] = out;
  drive.sample(t + d, peak.segment, out);
  return Math.atan2(out[1] * a - out[0] * b, out[0] * a + out[1] * b) / d;
}

/** Places at which the turning rate of the drive is looked at. */
const PROBES = 400;

/** False where tones overlap or beat: their common phase turns too unevenly to be followed. */
export function phaseIsSteady(drive: Drive, spans: readonly Span[]): boolean {
  const { peakRabi, frequency, time } = drive.scales;
  const out = new Float64Array(2);
  const small = 1e-6 * peakRabi;
  for (const span of spans) {
    if (span.gap) continue;
    if (span.last > span.first) return false;
    const d = Math.min(0.1 * time, 0.5 / frequency);
    let segment = span.first;
    let previous = Number.NaN;
    for (let k = 0; k < PROBES; k++) {
      const t = span.start + ((span.end - span.start - d) * (k + 0.5)) / PROBES;
      while (segment < span.last && t >= drive.breakpoints[segment + 1]) segment++;
      drive.sample(t, segment, out);
      const a = out[0];
      const b = out[1];
      drive.sample(t + d, segment, out);
      if (Math.hypot(a, b) < small) {
        previous = Number.NaN;
        continue;
      }
      const turn = Math.atan2(out[1] * a - out[0] * b, out[0] * a + out[1] * b) / d;
      if (Math.abs(turn - previous) > UNEVEN * frequency) return false;
      previous = turn;
    }
  }
  return true;
}

/** Change of the turning rate between probes, relative to the drive's frequency scale, that a single tone stays below. */
const UNEVEN = 0.1;
