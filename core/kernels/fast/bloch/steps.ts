import type { Drive } from '../../../pulse/drive.js';
import { coherentRate } from '../step-rule.js';
import type { TwoLevel } from '../two-level.js';
import type { PhaseFrame } from './frame.js';
import type { BlochProblem, BlochSpan, Source } from './problem.js';

/** Most steps of one run. */
export const MOST_STEPS = 200_000;
/** Most steps of a run that is recorded for its derivatives: a third of a kilobyte each. */
export const MOST_RECORDED = 60_000;
const FEWEST = 12;

/**
 * First guess of the steps per span (0 for gaps), coarse run of two: it resolves the envelope, the generalised Rabi
 * frequency (kicks sample what turns with it), what the Magnus expansion leaves, and the kicks' own second-order error.
 * All constants were fitted to the steps that three hundred random pulses need for 5e-9; half of them pass at once.
 */
export function firstCounts({ spans, drive, model }: BlochProblem): number[] {
  return spans.map((part) => {
    const { start, end, gap } = part.span;
    return gap ? 0 : Math.max(FEWEST, Math.ceil((end - start) * rateOf(part, drive, model)));
  });
}

/** Steps per ps. */
function rateOf({ source, frame }: BlochSpan, drive: Drive, model: TwoLevel): number {
  const weight = Math.abs(model.weight);
  if (source.kind === 'sampled') {
    const rabi = drive.scales.peakRabi * weight;
    const smooth = source.follow || drive.scales.frequency === 0;
    return Math.max(
      (smooth ? 0.9 : 0.5) * coherentRate(drive, rabi, model.energy, smooth),
      dissipativeRate(model, rabi),
    );
  }
  if (source.kind === 'complex') return complexRate(source, drive, model, frame);
  const [{ amplitude, fall }] = source.tones;
  const width = Math.sqrt(0.5 / fall);
  const rabi = weight * Math.abs(amplitude);
  const detuning = Math.abs(model.energy + frame.rate);
  const chirp = 2 * Math.abs(frame.chirp) * width;
  // Rotations about one axis commute: only what turns the axis leaves an error.
  const turned = Math.min(1, 2.6 * (detuning + chirp) * width);
  const coherent = (1.5 + turned) / width + 0.32 * rabi + 0.22 * detuning + 0.6 * chirp;
  return Math.cbrt(coherent ** 3 + dissipativeRate(model, rabi + 0.18 * (detuning + chirp)) ** 3);
}

/** What kicks leave to higher than second order. */
function dissipativeRate({ decay, dephasing }: TwoLevel, turning: number): number {
  return 5.7 * (decay + dephasing) ** 0.39 * turning ** 0.61 + 2 * (decay + dephasing);
}

function complexRate(
  { tones, unrest }: Source & { kind: 'complex' },
  drive: Drive,
  model: TwoLevel,
  frame: PhaseFrame,
): number {
  const weight = Math.abs(model.weight);
  const strongest = tones.reduce((most, t) => Math.max(most, Math.abs(t.amplitude)), 0);
  let [width, rabi, detuning, beat, chirp] = [Number.POSITIVE_INFINITY, 0, 0, 0, 0];
  for (const t of tones) {
    const own = Math.sqrt(0.5 / t.fall);
    const share = (Math.abs(t.amplitude) / strongest) ** (1 / 6);
    const z = model.energy + frame.rate + 2 * frame.chirp * (t.delay - frame.origin);
    width = Math.min(width, own);
    rabi += weight * Math.abs(t.amplitude);
    detuning = Math.max(detuning, Math.abs(z));
    beat = Math.max(beat, share * Math.abs(t.rate));
    chirp = Math.max(chirp, 2 * own * (Math.abs(frame.chirp) + share * Math.abs(t.chirp)));
  }
  rabi = Math.min(rabi, weight * drive.scales.peakRabi);
  const coherent = 0.7 / width + 0.8 * rabi + 0.56 * detuning + 0.4 * beat + 0.12 * chirp;
  const magnus = 0.25 * unrest ** 0.125;
  return Math.max((coherent ** 4 + magnus ** 4) ** 0.25, dissipativeRate(model, rabi));
}
