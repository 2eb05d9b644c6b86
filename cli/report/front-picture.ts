import { judge } from '../../optimizers/index.js';
import type { RunResult } from '../run/contract.js';
import { figureLabel } from './labels.js';
import { plotFront } from './plots/front.js';

/** The picture of a run's front. */
export function frontPicture(result: RunResult): Promise<string> {
  const { study, hash } = result;
  const { goal, design } = study;
  const point = ({ figures }: (typeof result.archive)[number]) => judge(figures, goal);
  const phonons = result.front[0]?.figures.phonons.method ?? 'none';
  const judged = (design.drift?.quantile ?? null) === null ? '' : 'quantile.';
  return plotFront({
    title: study.title === '' ? 'Pareto front' : study.title,
    subtitle: `${design.emitter.model} emitter, phonons: ${phonons}, designs at accuracy quoted, study ${hash.slice(0, 8)}`,
    brightnessTitle: `brightness per pulse: ${figureLabel(`${judged}signal.${goal.brightness}`)}`,
    impurityTitle: `impurity per pulse: ${figureLabel(`${judged}collected.${goal.impurity}`)}`,
    archive: result.archive.map(point),
    front: result.front.map(point),
    asked: goal.atLeast === null ? null : { level: goal.atLeast, best: result.best && point(result.best) },
  });
}
