import { judge } from '../../optimizers/index.js';
import type { RunResult } from '../run/contract.js';
import { figureLabel } from './labels.js';
import { plotFront } from './plots/front.js';
import { axisScale } from './plots/render.js';
import { plotSeries } from './plots/series.js';
import { boundText, thirdText } from './third.js';

/** Titles that every picture of a front has. */
function titlesOf({ study, hash, front }: RunResult) {
  const { goal, design } = study;
  const phonons = front[0]?.figures.phonons.method ?? 'none';
  const judged = (design.drift?.quantile ?? null) === null ? '' : 'quantile.';
  return {
    title: study.title === '' ? 'Pareto front' : study.title,
    subtitle: `${design.emitter.model} emitter, phonons: ${phonons}, designs at accuracy quoted, study ${hash.slice(0, 8)}`,
    brightness: `brightness per pulse: ${figureLabel(`${judged}signal.${goal.brightness}`)}`,
    impurity: `impurity per pulse: ${figureLabel(`${judged}collected.${goal.impurity}`)}`,
  };
}

/** A front with a third axis: a line for each of its slices. */
function slicesPicture(result: RunResult): Promise<string> {
  const { goal } = result.study;
  const { title, subtitle, brightness, impurity } = titlesOf(result);
  const bounds = [...new Set(result.front.map(({ slice }) => slice))];
  const points = (slice: number | null) =>
    result.front
      .filter((point) => point.slice === slice)
      .map(({ figures }) => judge(figures, goal))
      .map((point) => ({ x: point.brightness, y: point.impurity }));
  const series = bounds.map((slice) => ({ name: boundText(goal, slice), points: points(slice) }));
  return plotSeries({
    ...{ title, subtitle, xTitle: brightness, yTitle: impurity, logX: false },
    logY: axisScale(series.flatMap((s) => s.points.map(({ y }) => y))) === 'log',
    series,
    legend: `slices of the front, by ${thirdText(goal)?.name}`,
    mark: goal.atLeast === null ? null : { x: goal.atLeast, name: `asked for: ${goal.atLeast}` },
  });
}

/** The picture of a run's front. */
export function frontPicture(result: RunResult): Promise<string> {
  const { goal } = result.study;
  if (goal.third !== null && result.front.length > 0) return slicesPicture(result);
  const { title, subtitle, brightness, impurity } = titlesOf(result);
  const point = ({ figures }: (typeof result.archive)[number]) => judge(figures, goal);
  return plotFront({
    ...{ title, subtitle, brightnessTitle: brightness, impurityTitle: impurity },
    archive: result.archive.map(point),
    front: result.front.map(point),
    asked: goal.atLeast === null ? null : { level: goal.atLeast, best: result.best && point(result.best) },
  });
}
