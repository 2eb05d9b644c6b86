import { type Dimension, type DriftSpec, formatQuantity, inUnit } from '../../core/index.js';
import { DRIFTS, type DriftName } from '../commands/tolerance-points.js';
import type { ToleranceCase, ToleranceResult, ToleranceSweep } from '../commands/tolerance-study.js';
import { figureLabel, symbolOf } from './labels.js';
import { threeDigits } from './numbers.js';
import { plotTolerance } from './plots/tolerance.js';
import { bold, tableText } from './table.js';

export const TOLERANCE_FORMAT = 'pulsewright.tolerance/1';

/** How a drift is called and in which unit it is given. */
const ABOUT: Readonly<Record<DriftName, { key: string; title: string; dimension: Dimension; unit: string }>> =
  {
    area: { key: 'area', title: 'area', dimension: 'percent', unit: '%' },
    width: { key: 'width', title: 'width', dimension: 'percent', unit: '%' },
    detuning: { key: 'detuning', title: 'detuning', dimension: 'energy', unit: 'ueV' },
    filterCenter: { key: 'filter_center', title: 'filter centre', dimension: 'frequency', unit: 'GHz' },
  };

const rmsText = (name: DriftName, rms: number): string => formatQuantity(rms, ABOUT[name].dimension);

/** `area 2 %, detuning 5 ueV`: every drift that is there. */
function driftText(drift: DriftSpec): string {
  const present = DRIFTS.filter((name) => drift[name] > 0);
  return present.map((name) => `${ABOUT[name].title} ${rmsText(name, drift[name])}`).join(', ');
}

const caseName = ({ name, drift }: ToleranceCase): string =>
  name === 'none' || drift === null
    ? 'without drift'
    : name === 'together'
      ? 'all together'
      : driftText(drift);

function demandText({ demand, design }: ToleranceResult): string {
  const { goal, brightness, impurity } = demand;
  const share = design.drift?.quantile ?? null;
  const parts = [
    ...(brightness === null ? [] : [`signal ${symbolOf(goal.brightness)} ≥ ${brightness}`]),
    ...(impurity === null ? [] : [`collected ${symbolOf(goal.impurity)} ≤ ${impurity}`]),
    ...(goal.limits.length === 0 ? [] : ['goal.limits']),
  ];
  const judged =
    share === null ? 'mean over the drift' : `held by ${threeDigits(100 * share)} % of the drift`;
  return `${parts.join(', ')} (${judged})`;
}

function largestLines({ largest }: ToleranceResult): string[] {
  return largest.map(({ drift, rms, missedBeyond }) => {
    const { title } = ABOUT[drift];
    if (rms === null) return `  ${title}: none; missed without drift: ${missedBeyond.join(', ')}`;
    if (missedBeyond.length === 0) return `  ${title}: more than ${rmsText(drift, rms)}, the largest tried`;
    return `  ${title}: ${rmsText(drift, rms)}; beyond it ${missedBeyond.join(', ')} is missed`;
  });
}

/** Below this relative excess over the demanded brightness, a design has nothing to lose to drift. */
const RESERVE = 1e-3;

function reserveLines({ cases, demand }: ToleranceResult): string[] {
  const { verdict, missed } = cases[0].finding;
  const least = demand.brightness;
  if (least === null || missed.length > 0 || verdict.brightness > least * (1 + RESERVE)) return [];
  const figure = `signal ${symbolOf(demand.goal.brightness)}`;
  return [
    `note: without drift ${figure} is no more than demanded, so that any drift takes it below; a search with the drift`,
    '  in its study leaves a reserve, a lower --brightness tells what can be kept',
  ];
}

/** What a physicist reads: figures under each drift, the yield, and what could still be tolerated. */
export function toleranceText(result: ToleranceResult, color: boolean): string {
  const { goal } = result.demand;
  const rows = result.cases.map((own) => {
    const { verdict, missed } = own.finding;
    return [
      caseName(own),
      threeDigits(verdict.brightness),
      threeDigits(verdict.impurity),
      missed.length === 0 ? 'met' : `missed: ${missed.join(', ')}`,
    ];
  });
  const head = [
    'drift (rms)',
    `${symbolOf(goal.brightness)}\nsignal`,
    `${symbolOf(goal.impurity)}\ncollected`,
    'demand',
  ];
  const share = result.yield;
  return [
    bold(result.study.title || result.path, color),
    '',
    `demand: ${demandText(result)}`,
    '',
    tableText({ head, rows, left: [0, 3] }, color),
    '',
    share === null
      ? 'yield: not told: the study states no drift'
      : `yield: ${threeDigits(100 * share.share)} % ± ${threeDigits(100 * share.standardError)} % of ${share.samples} drift samples meet the demand, each by itself (seed ${share.seed})`,
    'largest rms of each drift alone that still meets the demand:',
    ...largestLines(result),
    ...reserveLines(result),
  ].join('\n');
}

function driftDocument(drift: DriftSpec | null): unknown {
  if (drift === null) return null;
  const { area, width, detuning, filterCenter } = drift;
  return { area, width, detuning_mev: detuning, filter_center_ghz: filterCenter };
}

/** The JSON document: rms of area and width as plain ratios. */
export function toleranceDocument(result: ToleranceResult): unknown {
  const { demand, design, study, hash, path } = result;
  const { goal } = demand;
  return {
    format: TOLERANCE_FORMAT,
    study: { title: study.title, hash, file: path },
    demand: {
      brightness: { figure: `signal.${goal.brightness}`, at_least: demand.brightness },
      impurity: { figure: `collected.${goal.impurity}`, at_most: demand.impurity },
      limits: goal.limits.map((l) => ({ figure: l.figure, at_most: l.atMost, at_least: l.atLeast })),
      judge: (design.drift?.quantile ?? null) === null ? 'mean' : 'quantile',
      quantile: design.drift?.quantile ?? null,
    },
    met: result.met,
    cases: result.cases.map(({ name, drift, finding }) => ({
      drift: name === 'filterCenter' ? 'filter_center' : name,
      rms: driftDocument(drift),
      brightness: finding.figures && finding.verdict.brightness,
      impurity: finding.figures && finding.verdict.impurity,
      missed: finding.missed,
      figures: finding.figures,
    })),
    yield: result.yield && {
      share: result.yield.share,
      standard_error: result.yield.standardError,
      samples: result.yield.samples,
      seed: result.yield.seed,
    },
    largest: result.largest.map(({ drift, rms, missedBeyond }) => {
      const { key, dimension, unit } = ABOUT[drift];
      return {
        drift: key,
        rms: rms === null ? null : inUnit(rms, dimension, unit),
        unit,
        missed_beyond: missedBeyond,
      };
    }),
    sweeps: result.sweeps.map(({ name, unit, ofStudy, points }) => ({
      drift: name === 'filterCenter' ? 'filter_center' : name,
      unit: driftDocument(unit),
      unit_is: ofStudy ? 'study' : 'largest tolerated',
      points,
    })),
  };
}

function legend({ name, unit, ofStudy }: ToleranceSweep, { largest }: ToleranceResult): string {
  if (name === 'together') return 'all drifts of the study';
  if (ofStudy) return driftText(unit);
  const tolerated = largest.some(({ drift, missedBeyond }) => drift === name && missedBeyond.length > 0);
  return `${driftText(unit)} (largest ${tolerated ? 'tolerated' : 'tried'})`;
}

/** Picture of brightness and impurity against the rms of each drift. */
export function tolerancePicture(result: ToleranceResult): Promise<string> {
  const { goal, brightness, impurity } = result.demand;
  const judged = (result.design.drift?.quantile ?? null) === null ? '' : 'quantile.';
  return plotTolerance({
    title: `${result.study.title || result.path}: tolerance`,
    subtitle: `demand: ${demandText(result)}`,
    brightnessTitle: figureLabel(`${judged}signal.${goal.brightness}`),
    impurityTitle: figureLabel(`${judged}collected.${goal.impurity}`),
    curves: result.sweeps.map((sweep) => ({ name: legend(sweep, result), points: sweep.points })),
    brightness,
    impurity,
  });
}
