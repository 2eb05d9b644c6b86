import { leakedPhotons, pulseFilter } from '../collection/leakage.js';
import { FEWEST_MOMENTS, judgeSeries, momentsOf } from '../collection/series.js';
import type { Design } from '../design.js';
import { type DriftNode, driftedDesign } from '../drift/nodes.js';
import type { PulseFigures } from '../figures.js';
import { type CountRequest, type CountResult, countPhotons, type Effort } from '../kernels/count.js';
import type { CountWithGradient } from '../kernels/gradient.js';
import { pulseFigureDerivatives } from '../pulse/derivatives/figures.js';
import {
  AREA,
  centerSlot,
  emptyDerivatives,
  FWHM,
  kappaSlot,
  TONE_SLOTS,
} from '../pulse/derivatives/layout.js';
import { pulseFigures } from '../pulse/figures.js';
import { assembleSample, byLevel, type Sample } from '../sample.js';
import { emittedRequest, rotatingFilter, type Situation, situation, survival } from '../situation.js';
import { HBAR } from '../units/constants.js';
import { differentiateCount, type Part, type Reading } from './count.js';
import type { Formula } from './formula.js';
import type { Functional } from './functional.js';
import { leakageDerivatives } from './leakage.js';
import { scalarOf } from './scalar.js';

/** A drift node with the derivative of each formula by the nominal design's slots (pulse/derivatives/layout.ts). */
export interface NodeDerivatives {
  readonly sample: Sample;
  readonly steps: number;
  /** Error estimate of this node by itself, in the measure of `FigureTree.accuracy`. */
  readonly error: number;
  readonly rows: readonly Float64Array[];
}

/** Differentiates the formulas at one node of the drift; null where there is no exact derivative. */
export function differentiateNode(
  nominal: Design,
  node: DriftNode,
  formulas: readonly Formula[],
  effort: Effort,
  kernel: CountWithGradient,
): NodeDerivatives | null {
  const design = driftedDesign(nominal, node);
  const where = situation(design);
  const leakage = leakedPhotons(design, pulseFilter(design, where.line, where.reference));
  const base = emittedRequest(design, where, node.shift / HBAR, effort);
  const pulse = pulseFigures(design.pulse, where.drive, design.laser?.piPulse ?? null);
  const setting = { design, where, leakage, pulse, base, kernel };
  const counted = design.collection.filter
    ? countFiltered(setting, formulas)
    : countEmitted(setting, formulas);
  if (!counted) return null;
  const rows = formulas.map(() => emptyDerivatives(design.pulse.tones.length));
  for (const part of counted.parts) {
    if (!addCounted(part, where, rows) || !addRest(part.functionals, design, where, rows)) return null;
  }
  for (const row of rows) rescale(row, node, design.pulse.tones.length);
  const { sample, steps, localErrors, seriesError } = counted;
  return { sample, steps, error: Math.max(1000 * localErrors, where.drive.error, seriesError), rows };
}

interface Setting {
  readonly design: Design;
  readonly where: Situation;
  readonly leakage: number;
  readonly pulse: PulseFigures;
  readonly base: CountRequest;
  readonly kernel: CountWithGradient;
}

interface Counted {
  readonly sample: Sample;
  readonly parts: readonly Part[];
  readonly steps: number;
  readonly localErrors: number;
  readonly seriesError: number;
}

type Values = Readonly<Record<string, number>>;

function sampleOf(
  { design, where, leakage, base, pulse }: Setting,
  values: Values,
  populations: readonly number[],
  moments: readonly number[],
): Sample {
  return assembleSample({ values, populations, moments, leakage }, pulse, design, where, base.effort.series);
}

function readingOf({ design, where, leakage }: Setting, sample: Sample, order: number | null): Reading {
  const eta = survival(design, where.scheme);
  return { value: (scalar) => scalarOf(sample, scalar), signal: sample.signal, leakage, eta, order };
}

const numbered = (formulas: readonly Formula[], emitted: boolean | null): Map<number, Formula> =>
  new Map(
    [...formulas.entries()].filter(
      ([, { scalars }]) => emitted === null || emitted === scalars.some((s) => s.startsWith('emitted.')),
    ),
  );

function countEmitted(setting: Setting, formulas: readonly Formula[]): Counted | null {
  let sample: Sample | null = null;
  const read = (values: Values) => {
    sample = sampleOf(setting, values, [], []);
    return readingOf(setting, sample, null);
  };
  const part = differentiateCount(setting.base, numbered(formulas, null), read, setting.kernel);
  if (part === null || sample === null) return null;
  const { result } = part.gradient;
  return {
    sample: withPopulations(sample, setting.where, result),
    parts: [part],
    steps: result.steps,
    localErrors: result.localErrors,
    seriesError: 0,
  };
}

function withPopulations(sample: Sample, { scheme }: Situation, { populations }: CountResult): Sample {
  return { ...sample, populations: byLevel(scheme.levels, populations) };
}

/** What was emitted before the filter: differentiated only where a formula asks for it. */
function countBefore(
  setting: Setting,
  formulas: readonly Formula[],
): { result: CountResult; parts: Part[] } | null {
  const before = numbered(formulas, true);
  if (before.size === 0) return { result: countPhotons(setting.base), parts: [] };
  const read = (values: Values) => readingOf(setting, sampleOf(setting, values, [], NO_MOMENTS), null);
  const part = differentiateCount(setting.base, before, read, setting.kernel);
  return part && { result: part.gradient.result, parts: [part] };
}

/** Stand in where only what was emitted is looked at. */
const NO_MOMENTS = [0, 0, 0];

function countFiltered(setting: Setting, formulas: readonly Formula[]): Counted | null {
  const { design, where, base } = setting;
  const { filter } = design.collection;
  const emitted = countBefore(setting, formulas);
  if (!filter || !emitted) return null;
  const behind = numbered(formulas, false);
  let order: number = FEWEST_MOMENTS[base.effort.series];
  for (;;) {
    let sample: Sample | null = null;
    let seriesError = 0;
    let next = order;
    const read = (values: Values) => {
      const moments = momentsOf(values, order);
      const series = judgeSeries(moments, base.effort.series);
      if (series.kind === 'more') {
        next = series.order;
        return null;
      }
      seriesError = series.error;
      sample = sampleOf(setting, emitted.result.values, emitted.result.populations, moments);
      return readingOf(setting, sample, order);
    };
    const wanted = Array.from({ length: order }, (_, k) => `m${k + 1}`);
    const request = { ...base, filter: { ...rotatingFilter(filter, where), order }, wanted };
    const part = differentiateCount(request, behind, read, setting.kernel);
    if (part === null) return null;
    if (sample !== null) {
      const { result } = part.gradient;
      const localErrors = Math.max(result.localErrors, emitted.result.localErrors);
      const steps = result.steps + emitted.result.steps;
      return { sample, parts: [...emitted.parts, part], steps, localErrors, seriesError };
    }
    order = next;
  }
}

/** What goes through the drive's samples and through the filter; false where the drive has no derivatives. */
function addCounted(
  { gradient, seeded }: Part,
  { drive }: Situation,
  rows: readonly Float64Array[],
): boolean {
  if (seeded.length === 0) return true;
  const { times, segments, sensitivities } = gradient;
  const into = seeded.map((i) => rows[i]);
  sensitivities.forEach(({ kappa, center }, j) => {
    const tones = (into[j].length - 2) / TONE_SLOTS;
    into[j][kappaSlot(tones)] += kappa;
    into[j][centerSlot(tones)] += center;
  });
  return drive.differentiate({ times, segments, scalars: sensitivities.map((s) => s.drive) }, into);
}

/** What goes through leakage and the figures of the pulse; false where they have no derivatives. */
function addRest(
  functionals: ReadonlyMap<number, Functional>,
  design: Design,
  where: Situation,
  rows: readonly Float64Array[],
): boolean {
  const found = new Map<string, Float64Array | null>();
  const vector = (key: 'leakage' | keyof PulseFigures): Float64Array | null => {
    const known = found.get(key);
    if (known !== undefined) return known;
    const { pulse, laser } = design;
    const made =
      key === 'leakage'
        ? leakageDerivatives(design, pulseFilter(design, where.line, where.reference))
        : pulseFigureDerivatives(key, { pulse, drive: where.drive, piPulse: laser?.piPulse ?? null });
    found.set(key, made);
    return made;
  };
  for (const [i, { leakage, pulse }] of functionals) {
    const weights = Object.entries({ ...pulse, leakage }) as [keyof PulseFigures, number][];
    for (const [key, weight] of weights) {
      if (weight === 0 || ((key as string) === 'leakage' && !design.laser?.piPulse)) continue;
      const slopes = vector(key);
      if (slopes === null) return false;
      for (let s = 0; s < slopes.length; s++) rows[i][s] += weight * slopes[s];
    }
  }
  return true;
}

/** From the drifted areas and widths to the nominal ones. */
function rescale(row: Float64Array, { area, width }: DriftNode, tones: number): void {
  for (let k = 0; k < tones; k++) {
    row[TONE_SLOTS * k + AREA] *= 1 + area;
    row[TONE_SLOTS * k + FWHM] *= 1 + width;
  }
}
