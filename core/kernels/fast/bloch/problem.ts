import type { Drive } from '../../../pulse/drive.js';
import type { GaussianTone } from '../../../pulse/gaussians.js';
import type { CountRequest } from '../../count.js';
import type { Span } from '../spans.js';
import { phaseIsSteady } from '../step-rule.js';
import type { TwoLevel } from '../two-level.js';
import { type PhaseFrame, phaseFrame, seenFrom, unrest } from './frame.js';

/** How the drive of one span is tabulated. */
export type Source =
  | { readonly kind: 'real'; readonly tones: readonly GaussianTone[] }
  | { readonly kind: 'complex'; readonly tones: readonly GaussianTone[]; readonly unrest: number }
  | { readonly kind: 'sampled'; readonly follow: boolean };

/** A span of the drive window with the frame in which it is propagated. */
export interface BlochSpan {
  readonly span: Span;
  readonly frame: PhaseFrame;
  readonly source: Source;
}

/** A request made ready for any number of steps. */
export interface BlochProblem {
  readonly drive: Drive;
  readonly model: TwoLevel;
  readonly spans: readonly BlochSpan[];
  readonly thinning: number | null;
  readonly wants: Wants;
}

/** Chains that the figures asked for need. */
export interface Wants {
  readonly counted: boolean;
  /** p_2 and p_3. */
  readonly ladder: boolean;
  readonly thinned: boolean;
}

export function prepare(request: CountRequest, model: TwoLevel, spans: readonly Span[]): BlochProblem {
  const { drive, thinning } = request;
  return {
    drive,
    model,
    thinning,
    spans: spans.map((span) => place(span, drive, model.energy)),
    wants: wantsOf(request),
  };
}

const ALL: Wants = { ladder: true, counted: false, thinned: true };

function wantsOf({ wanted, thinning }: CountRequest): Wants {
  if (!wanted) return thinning === null ? { ...ALL, thinned: false } : ALL;
  let [ladder, counted, thinned] = [false, false, false];
  for (const name of wanted) {
    if (name === 'p2' || name === 'p3') ladder = true;
    else if (name === 'p0' || name === 'p1' || name === 'multiphoton') counted = true;
    else if (name.startsWith('thinned')) thinned = thinning !== null;
  }
  return { ladder, counted: counted && !ladder, thinned };
}

const STILL: PhaseFrame = { origin: 0, constant: 0, rate: 0, chirp: 0 };

function place(span: Span, drive: Drive, energy: number): BlochSpan {
  const acting = drive.gaussians?.filter((tone) => acts(tone, span)) ?? [];
  if (span.gap) return { span, frame: STILL, source: { kind: 'sampled', follow: false } };
  if (acting.length === 0) {
    const follow = drive.scales.frequency > 0 && phaseIsSteady(drive, [span]);
    return { span, frame: STILL, source: { kind: 'sampled', follow } };
  }
  const frame = phaseFrame(acting, energy);
  const tones = acting.map((tone) => seenFrom(frame, tone));
  if (tones.length === 1) return { span, frame, source: { kind: 'real', tones } };
  return { span, frame, source: { kind: 'complex', tones, unrest: unrest(acting, energy, frame) } };
}

/** A tone this far down (e-folds) at the nearest end of a span is not part of it. */
const FADED = 45;

function acts(tone: GaussianTone, span: Span): boolean {
  const off = Math.max(0, span.start - tone.delay, tone.delay - span.end);
  return tone.amplitude !== 0 && tone.fall * off * off < FADED;
}
