import { type EmitterModel, emitterModels, exactQuantity } from '../../../core/index.js';
import { type ReadOf, snakeCase } from '../keys/kinds.js';
import { keyEntries } from '../keys/paths.js';
import type { studyKeys } from '../keys/table.js';
import { describeFound, locate } from '../source/placed.js';
import type { ReadContext } from './context.js';

/** A study as read: undefined wherever a key is faulty. */
export type RawStudy = NonNullable<ReadOf<typeof studyKeys>>;

type Rule = (raw: RawStudy, report: Report, context: ReadContext) => void;
/** Reports a fault at a path; `found` is what stands there unless given. */
type Report = (path: string, wanted: string, found?: string) => void;

/** What one key demands of another. Each rule looks only at values that are not faulty by themselves. */
export function checkRules(raw: RawStudy, context: ReadContext): void {
  const report: Report = (path, wanted, found) => {
    const place = locate(context.root, path);
    context.fault(place.at, path, found ?? (place.exact ? describeFound(place.node) : 'nothing'), wanted);
  };
  for (const rule of RULES) rule(raw, report, context);
}

const modelOf = (raw: RawStudy): EmitterModel | undefined =>
  emitterModels.find((model) => model.name === raw.emitter?.model);

const stands = (context: ReadContext, path: string): boolean => locate(context.root, path).exact;

const biexcitonKeys: Rule = (raw, report, context) => {
  const model = modelOf(raw);
  if (!model) return;
  if (model.hasBiexciton) {
    if (raw.emitter?.binding === null) {
      report('emitter.binding', `an energy in ueV or meV, not 0: model ${model.name} has a biexciton`);
    }
    return;
  }
  for (const { pattern: path, key } of keyEntries) {
    if (key.kind !== 'leaf' || key.only !== 'biexciton') continue;
    if (stands(context, path))
      report(path, `a model with a biexciton (${withBiexciton()}); ${model.name} has none`);
  }
};

const withBiexciton = (): string =>
  emitterModels
    .filter((m) => m.hasBiexciton)
    .map((m) => m.name)
    .join(', ');

const reference: Rule = (raw, report) => {
  const model = modelOf(raw);
  if (model && !model.hasBiexciton && raw.pulse?.reference === 'two-photon') {
    report(
      'pulse.reference',
      `exciton for model ${model.name}: it has no biexciton (${withBiexciton()} has)`,
    );
  }
};

const collected: Rule = (raw, report) => {
  const model = modelOf(raw);
  const { line, polarization } = raw.collection ?? {};
  if (!model) return;
  if (line !== undefined && !model.lines.includes(line)) {
    report('collection.line', `one of ${model.lines.join(', ')} for model ${model.name}`);
  }
  if (polarization !== undefined && !model.polarizations.includes(polarization)) {
    report('collection.polarization', `one of ${model.polarizations.join(', ')} for model ${model.name}`);
  }
};

/** The largest P(n=1) or P(n≥1) that the path allows; null when unknown. */
function brightestSignal(raw: RawStudy): { limit: number; why: string } | null {
  const model = modelOf(raw);
  const { efficiency, polarization } = raw.collection ?? {};
  if (!model || efficiency === undefined || polarization === undefined) return null;
  // An emitter that cannot tell h from v sends half of its light through a crossed analyser.
  const half = polarization === 'crossed' && !model.polarizations.includes('h');
  const why = `the efficiency ${efficiency}${half ? ' × 1/2 of the crossed polariser' : ''}`;
  return { limit: half ? efficiency / 2 : efficiency, why };
}

const reach: Rule = (raw, report) => {
  const { goal } = raw;
  const brightest = brightestSignal(raw);
  if (!goal || !brightest || goal.brightness === undefined || goal.brightness === 'mean') return;
  const levels: [string, number | null | undefined][] = [
    ['goal.at_least', goal.atLeast],
    ['goal.front.from', goal.front?.from],
    ['goal.front.to', goal.front?.to],
  ];
  for (const [path, level] of levels) {
    if (typeof level === 'number' && level > brightest.limit) {
      report(path, `at most ${brightest.limit}: brightness cannot exceed ${brightest.why}`);
    }
  }
};

const frontOrder: Rule = (raw, report) => {
  const { from, to } = raw.goal?.front ?? {};
  if (typeof from === 'number' && typeof to === 'number' && !(from < to)) {
    report('goal.front', 'from below to', `levels from ${from} to ${to}`);
  }
};

const limits: Rule = (raw, report) => {
  for (const [name, limit] of Object.entries(raw.goal?.limits ?? {})) {
    if (!limit) continue;
    const path = `goal.limits.${snakeCase(name)}`;
    const { atMost, atLeast } = limit;
    if (atMost === null && atLeast === null) report(path, 'at_most, at_least or both');
    if (typeof atMost === 'number' && typeof atLeast === 'number' && atLeast > atMost) {
      report(path, 'at_least not above at_most', `at_least ${atLeast} and at_most ${atMost}`);
    }
    if (name.startsWith('filtered.') && raw.collection?.filter === null) {
      report(path, 'a study with collection.filter: without one there is no filtered light', 'a limit');
    }
  }
};

const NEEDS_PI_PULSE = 'laser.pi_pulse with energy and fwhm';

/** Energies in fJ and leaked photons follow from the measured π pulse. */
const energies: Rule = (raw, report) => {
  const { laser, goal } = raw;
  // Undefined is faulty by itself.
  const piPulse = laser === null ? null : laser?.piPulse;
  if (piPulse !== null) return;
  if (goal?.limits?.['pulse.energyFj']) {
    report('goal.limits.pulse.energy_fj', `${NEEDS_PI_PULSE}: energies in fJ follow from it`, 'a limit');
  }
  const axis = goal?.third?.axis;
  if (axis === 'energy') report('goal.third.axis', `${NEEDS_PI_PULSE}: energies in fJ follow from it`);
  if (axis === 'leakage') report('goal.third.axis', `${NEEDS_PI_PULSE}: without one nothing leaks`);
};

const nothingLeaks: Rule = (raw, report) => {
  const { laser, goal } = raw;
  if (goal?.third?.axis !== 'leakage' || laser?.piPulse === null || laser?.rejection !== 0) return;
  if (raw.pulse?.tones?.length === 1)
    report('goal.third.axis', 'laser.rejection above 0: without one nothing leaks');
};

const leakage: Rule = (raw, report) => {
  const { laser } = raw;
  if (laser && typeof laser.rejection === 'number' && laser.rejection > 0 && laser.piPulse === null) {
    report('laser.rejection', 'laser.pi_pulse with energy and fwhm: leakage follows from the pulse energy');
  }
};

const nominalBias: Rule = (raw, report) => {
  const tuning = raw.emitter?.tuning;
  if (!tuning?.range || tuning.bias === undefined) return;
  const { from, to } = tuning.range;
  if (tuning.bias >= from && tuning.bias <= to) return;
  const [low, high] = [from, to].map((end) => exactQuantity(end, 'voltage'));
  report('emitter.tuning.bias', `a voltage inside emitter.tuning.range, ${low} to ${high}`);
};

const RULES: readonly Rule[] = [
  biexcitonKeys,
  reference,
  collected,
  reach,
  frontOrder,
  limits,
  energies,
  nothingLeaks,
  leakage,
  nominalBias,
];
