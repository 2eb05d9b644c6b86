import {
  addPoisson,
  type Count,
  countFromMoments,
  type SeriesRule,
  seriesHolds,
} from './collection/moments.js';
import type { Design } from './design.js';
import type { FigureTree, PulseFigures } from './figures.js';
import type { PhononCount } from './phonons/contract.js';
import { type Situation, survival } from './situation.js';

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
  /** Size at which the exact phonon method settled. */
  readonly tower?: PhononCount['tower'];
  readonly steps: number;
  /** Error estimate of this run by itself, in the measure of `FigureTree.accuracy`. */
  readonly error: number;
}

/** What was counted of a design, and what leaks. */
export interface Counted {
  /** By target name, before losses. */
  readonly values: Readonly<Record<string, number>>;
  /** In level order. */
  readonly populations: readonly number[];
  /** Factorial moments behind the filter; empty without one. */
  readonly moments: readonly number[];
  /** Leaked photons per pulse. */
  readonly leakage: number;
}

/** The sample of a design from what was counted. What was not counted comes out as NaN. */
export function assembleSample(
  { values, populations, moments, leakage }: Counted,
  pulse: PulseFigures,
  design: Design,
  { scheme }: Situation,
  series: SeriesRule,
): Sample {
  const eta = survival(design, scheme);
  const filtered = design.collection.filter ? filteredSample(moments, series) : null;
  const signal = filtered ? filteredSignal(moments, eta, series) : emittedSignal(values, eta);
  return {
    emitted: {
      mean: counted(values, 'mean'),
      factorial2: counted(values, 'factorial2'),
      p: [counted(values, 'p0'), counted(values, 'p1'), counted(values, 'p2'), counted(values, 'p3')],
      multiphoton: counted(values, 'multiphoton'),
    },
    filtered,
    signal,
    collected: addPoisson(signal, leakage),
    leakage,
    populations: byLevel(scheme.levels, populations),
    pulse,
  };
}

/** Populations by level name. */
export function byLevel(
  levels: readonly { readonly name: string }[],
  populations: readonly number[],
): Record<string, number> {
  const out: Record<string, number> = {};
  for (let i = 0; i < levels.length; i++) out[levels[i].name] = populations[i] ?? Number.NaN;
  return out;
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

const counted = (values: Counted['values'], name: string): number => values[name] ?? Number.NaN;

function emittedSignal(values: Counted['values'], eta: number): Count {
  const whole = eta === 1;
  return {
    mean: eta * counted(values, 'mean'),
    factorial2: eta * eta * counted(values, 'factorial2'),
    p0: counted(values, whole ? 'p0' : 'thinned0'),
    single: counted(values, whole ? 'p1' : 'thinned1'),
    multiphoton: counted(values, whole ? 'multiphoton' : 'thinnedMultiphoton'),
  };
}
