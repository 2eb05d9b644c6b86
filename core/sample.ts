import { leakedPhotons, pulseFilter } from './collection/leakage.js';
import {
  addPoisson,
  type Count,
  countFromMoments,
  type SeriesRule,
  seriesError,
  seriesHolds,
} from './collection/moments.js';
import type { RotatingFilter } from './counting/filtered.js';
import type { Design, FilterSpec } from './design.js';
import { type DriftNode, driftedDesign } from './drift/nodes.js';
import type { Scheme } from './emitter/contract.js';
import { collectedDipoles } from './emitter/generator.js';
import { emitterModel } from './emitter/registry.js';
import type { FigureTree, PulseFigures } from './figures.js';
import { type CountRequest, type Effort, PropagationError } from './kernels/count.js';
import { type Resonance, schemeResonances, slowestFrame } from './kernels/frame.js';
import { type Choice, chooseMethod, type DriveKind } from './phonons/choose.js';
import type { PhononCount } from './phonons/contract.js';
import { type PhononPlan, phononPlan } from './phonons/plan.js';
import { DispersionError } from './pulse/dispersed.js';
import { createDrive, type DriveOptions, type PulseDrive } from './pulse/drive.js';
import { pulseFigures } from './pulse/figures.js';
import { HBAR, RAD_PER_PS_PER_GHZ } from './units/constants.js';

/** Everything that may be averaged over drift: moments and probabilities, never ratios. Null: series too short. */
export interface Sample {
  readonly emitted: {
    readonly mean: number;
    readonly factorial2: number;
    readonly p: readonly number[];
    readonly multiphoton: number;
  };
  readonly filtered: FilteredSample | null;
  readonly signal: Count;
  readonly collected: Count;
  readonly leakage: number;
  readonly populations: Readonly<Record<string, number>>;
  readonly pulse: PulseFigures;
}

export interface FilteredSample {
  readonly mean: number;
  readonly factorial2: number;
  readonly p: readonly number[] | null;
  readonly multiphoton: number | null;
}

export interface SampleRun {
  readonly sample: Sample;
  readonly phonons: FigureTree['phonons'];
  /** How the phonons were treated, as whole phrases. */
  readonly remarks: readonly string[];
  readonly steps: number;
  /** Error estimate of this run by itself, in the measure of `FigureTree.accuracy`. */
  readonly error: number;
}

/** Fewest and most factorial moments behind a filter. */
export const FEWEST_MOMENTS = { bound: 4, estimate: 3 } as const;
const MOST_MOMENTS = 6;

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
  const drive = driveOf(pulse, { frame: frame - reference, projection: scheme.projection });
  return { scheme, reference, frame, drive, line };
}

/** A pulse that spreads beyond what can be sampled is one more propagation that cannot be carried out. */
function driveOf(pulse: Design['pulse'], options: DriveOptions): PulseDrive {
  try {
    return createDrive(pulse, options);
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

/** Figures of one design at one drift node. */
export function sampleDesign(nominal: Design, node: DriftNode, wanted: Effort): SampleRun {
  const design = driftedDesign(nominal, node);
  const where = situation(design);
  const plan = planOf(design, where, node.shift / HBAR, wanted);
  // A hierarchy settles to 1e-3: a bound on the moment series far below that would only cost operators.
  const effort: Effort = plan.method === 'exact' ? { ...wanted, series: 'estimate' } : wanted;
  const run = countDesign(design, where, node.shift / HBAR, effort, plan);
  const leakage = leakedPhotons(design, pulseFilter(design, where.line, where.reference));
  return {
    sample: assembleSample(
      run.result.values,
      run.result.populations,
      run.moments,
      leakage,
      design,
      where,
      effort,
    ),
    phonons: { method: plan.method, flags: run.result.flags },
    remarks: [...plan.remarks, ...run.result.remarks],
    steps: run.result.steps,
    // A refined mesh no longer has the errors that were measured while it was built.
    error: Math.max(
      effort.parts > 1 || effort.checked ? 0 : run.result.localErrors * 1000,
      where.drive.error,
      run.seriesError,
      run.result.error,
    ),
  };
}

/**
 * The sample of a design from what was counted.
 * @param values by target name, before losses
 * @param moments factorial moments behind the filter; empty without one
 */
export function assembleSample(
  values: Readonly<Record<string, number>>,
  populations: readonly number[],
  moments: readonly number[],
  leakage: number,
  design: Design,
  { scheme, drive }: Situation,
  { series }: Pick<Effort, 'series'>,
): Sample {
  const eta = survival(design, scheme);
  const filtered = design.collection.filter ? filteredSample(moments, series) : null;
  const signal = filtered ? filteredSignal(moments, eta, series) : emittedSignal(values, eta);
  return {
    emitted: {
      mean: values['mean'],
      factorial2: values['factorial2'],
      p: [values['p0'], values['p1'], values['p2'], values['p3']],
      multiphoton: values['multiphoton'],
    },
    filtered,
    signal,
    collected: addPoisson(signal, leakage),
    leakage,
    populations: Object.fromEntries(scheme.levels.map((l, i) => [l.name, populations[i]])),
    pulse: pulseFigures(design.pulse, drive, design.laser?.piPulse ?? null),
  };
}

/** With which phonon method the design is counted. */
function planOf(design: Design, where: Situation, shift: number, effort: Effort): PhononPlan {
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

interface CountRun {
  readonly result: PhononCount;
  readonly moments: readonly number[];
  /** Relative error that the moment series may leave. */
  readonly seriesError: number;
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

/** What the moments found say: they suffice, or how many more would. */
export type SeriesOutcome =
  | { readonly kind: 'enough'; readonly error: number }
  | { readonly kind: 'more'; readonly order: number };

/** Whether a series is long enough for P(n≥2), or the highest order is reached; `error` is what it may leave. */
export function judgeSeries(moments: readonly number[], rule: SeriesRule): SeriesOutcome {
  const count = countFromMoments(moments, 1);
  if (seriesHolds(count, rule)) return { kind: 'enough', error: seriesError(count, rule) };
  if (moments.length >= MOST_MOMENTS) return { kind: 'enough', error: 0 };
  return { kind: 'more', order: nextOrder(moments, rule) };
}

export const momentsOf = (values: Readonly<Record<string, number>>, order: number): number[] =>
  Array.from({ length: order }, (_, k) => values[`m${k + 1}`]);

/** Raises the number of moments until their own bound holds for P(n≥2), or the highest order is reached. */
function countDesign(
  design: Design,
  where: Situation,
  shift: number,
  effort: Effort,
  plan: PhononPlan,
): CountRun {
  const base = emittedRequest(design, where, shift, effort);
  const { filter } = design.collection;
  if (!filter) return { result: plan.count(base), moments: [], seriesError: 0 };
  const rotating = rotatingFilter(filter, where);
  let order: number = FEWEST_MOMENTS[effort.series];
  for (;;) {
    const result = plan.count({ ...base, filter: { ...rotating, order } });
    const moments = momentsOf(result.values, order);
    const series = judgeSeries(moments, effort.series);
    if (series.kind === 'enough') return { result, moments, seriesError: series.error };
    order = series.order;
  }
}

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

function filteredSample(moments: readonly number[], rule: SeriesRule): FilteredSample {
  const count = countFromMoments(moments, 1);
  const holds = seriesHolds(count, rule);
  return {
    mean: moments[0],
    factorial2: moments[1],
    p: holds ? [count.p0, count.p1] : null,
    multiphoton: holds ? count.multiphoton : null,
  };
}

function filteredSignal(moments: readonly number[], eta: number, rule: SeriesRule): Count {
  const count = countFromMoments(moments, eta);
  const holds = seriesHolds(count, rule);
  return {
    mean: eta * moments[0],
    factorial2: eta * eta * moments[1],
    p0: holds ? count.p0 : null,
    single: holds ? count.p1 : null,
    multiphoton: holds ? count.multiphoton : null,
  };
}

function emittedSignal(v: Readonly<Record<string, number>>, eta: number): Count {
  const whole = eta === 1;
  return {
    mean: eta * v['mean'],
    factorial2: eta * eta * v['factorial2'],
    p0: whole ? v['p0'] : v['thinned0'],
    single: whole ? v['p1'] : v['thinned1'],
    multiphoton: whole ? v['multiphoton'] : v['thinnedMultiphoton'],
  };
}
