import { FEWEST_MOMENTS } from './collection/series.js';
import type { RotatingFilter } from './counting/filtered.js';
import type { Design, FilterSpec } from './design.js';
import type { Scheme } from './emitter/contract.js';
import { collectedDipoles } from './emitter/generator.js';
import { emitterModel } from './emitter/registry.js';
import { type CountRequest, type Effort, PropagationError } from './kernels/count.js';
import { type Resonance, schemeResonances, slowestFrame } from './kernels/frame.js';
import { type Choice, chooseMethod, type DriveKind } from './phonons/choose.js';
import { type PhononPlan, phononPlan } from './phonons/plan.js';
import { DispersionError } from './pulse/dispersed.js';
import { createDrive, type PulseDrive } from './pulse/drive.js';
import { HBAR, RAD_PER_PS_PER_GHZ } from './units/constants.js';

/** A design in the terms of the propagator, without drift. */
export interface Situation {
  readonly scheme: Scheme;
  /** Pulse reference relative to the nominal mean exciton line, 1/ps. */
  readonly reference: number;
  /** Rotating frame relative to the nominal mean exciton line, 1/ps. */
  readonly frame: number;
  readonly drive: PulseDrive;
  /** Nominal centre of the collected line relative to the mean exciton line, 1/ps. */
  readonly line: number;
}

export function situation(design: Design): Situation {
  const { emitter, pulse, collection } = design;
  const scheme = emitterModel(emitter.model).scheme(emitter);
  const line = scheme.lines[collection.line];
  if (line === undefined) throw new Error(`emitter model ${emitter.model} has no ${collection.line} line`);
  if (pulse.reference === 'two-photon' && scheme.twoPhoton === null) {
    throw new Error(`emitter model ${emitter.model} has no two-photon resonance`);
  }
  const reference = pulse.reference === 'two-photon' ? (scheme.twoPhoton as number) : 0;
  const resonances: Resonance[] = schemeResonances(scheme);
  for (const t of pulse.tones)
    resonances.push({ center: reference + t.detuning / HBAR, quanta: 1, weight: 1 });
  if (collection.filter) {
    const center = line + collection.filter.center * RAD_PER_PS_PER_GHZ;
    resonances.push({ center, quanta: 1, weight: FEWEST_MOMENTS.bound });
  }
  const frame = slowestFrame(resonances);
  const drive = asPropagation(() =>
    createDrive(pulse, { frame: frame - reference, projection: scheme.projection }),
  );
  return { scheme, reference, frame, drive, line };
}

/** A pulse that spreads beyond what can be sampled is one more propagation that cannot be carried out. */
export function asPropagation<T>(work: () => T): T {
  try {
    return work();
  } catch (error) {
    if (error instanceof DispersionError) throw new PropagationError(error.message);
    throw error;
  }
}

/** Angle of the collected polarisation from h, rad; `all` where the analyser is open. */
function collectedAxis(design: Design): number | 'all' {
  switch (design.collection.polarization) {
    case 'h':
      return 0;
    case 'v':
      return Math.PI / 2;
    case 'crossed':
      return design.pulse.tones[0].polarization + Math.PI / 2;
    case 'all':
      return 'all';
  }
}

/** Survival of the signal: everything linear between emission and where brightness is quoted, the filter left out. */
export function survival({ collection }: Design, scheme: Scheme): number {
  const crossedHalf = scheme.projection === 'full' && collection.polarization === 'crossed' ? 0.5 : 1;
  return collection.efficiency * crossedHalf;
}

/** What to count, without the filter. */
export function emittedRequest(
  design: Design,
  { scheme, frame, drive }: Situation,
  shift: number,
  effort: Effort,
): CountRequest {
  const { collection } = design;
  const dipoles = collectedDipoles(scheme, collection.line, collectedAxis(design));
  const eta = survival(design, scheme);
  const thinning = collection.filter === null && eta < 1 ? eta : null;
  return { scheme, dipoles, drive, frame, shift, effort, thinning, filter: null };
}

/** The filter of a design in the rotating frame. */
export function rotatingFilter(filter: FilterSpec, { line, frame }: Situation): RotatingFilter {
  return {
    kappa: filter.fwhm * RAD_PER_PS_PER_GHZ,
    center: line + filter.center * RAD_PER_PS_PER_GHZ - frame,
  };
}

/** Whether phonons act on the emitter at all. */
export const hasPhonons = ({ emitter }: Design): boolean =>
  emitter.phonons !== null && emitter.phonons.coupling > 0;

/** With which phonon method the design is counted. */
export function planOf(design: Design, where: Situation, shift: number, effort: Effort): PhononPlan {
  const kind = driveKind(design, where, shift);
  return phononPlan(design.emitter.phonons, where.drive, kind, effort.series === 'bound');
}

/** The second-order phonon method that `auto` would take for a design without drift; null without phonons. */
export function phononChoice(design: Design): Choice | null {
  const { phonons } = design.emitter;
  if (phonons === null || phonons.coupling === 0) return null;
  const where = situation(design);
  return chooseMethod(where.drive, phonons, driveKind(design, where, 0));
}

/** How far each tone lies from what it can drive. */
function driveKind(design: Design, where: Situation, shift: number): DriveKind {
  const { scheme, reference } = where;
  const resonances = [0, ...(scheme.twoPhoton === null ? [] : [scheme.twoPhoton])];
  const { tones } = design.pulse;
  const offsets = tones.map((t) =>
    Math.min(...resonances.map((r) => Math.abs(reference + t.detuning / HBAR - shift - r))),
  );
  const chirped = tones.some((t) => t.gdd !== 0 || t.tod !== 0);
  return { offsets, chirped };
}
