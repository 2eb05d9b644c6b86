import { applyParameters, thirdAxes } from '../../optimizers/index.js';
import { biasOf } from '../study/index.js';
import { FRONT_FORMAT, type FrontDesign, type RunResult } from './contract.js';
import { explanationDocument } from './explain/explanation.js';
import { columnOf, inColumn } from './parameters.js';

/** The JSON document of a run: what front.csv holds, how it was found and what its hypervolume refers to. */
export function frontDocument(result: RunResult): unknown {
  const { study, hash, version, outcome } = result;
  const { goal, search, parameters } = study;
  const parametersOf = (values: readonly number[]) =>
    Object.fromEntries(parameters.map((p, i) => [columnOf(p.path), inColumn(values[i], p.path)]));
  const point = ({ level, slice, file, stage, values, figures }: FrontDesign) => ({
    level,
    slice,
    design: file,
    found_by: stage,
    parameters: parametersOf(values),
    bias_mv: biasOf(study, applyParameters(study, values)),
    figures,
  });
  return {
    format: FRONT_FORMAT,
    version,
    study: { title: study.title, hash, seed: search.seed },
    goal: {
      impurity: `collected.${goal.impurity}`,
      brightness: `signal.${goal.brightness}`,
      at_least: goal.atLeast,
      third: goal.third && {
        figure: thirdAxes[goal.third.axis].figure,
        sense: thirdAxes[goal.third.axis].sense,
        slices: [...new Set(outcome.front.map(({ slice }) => slice))],
      },
      limits: goal.limits.map(({ figure, atMost, atLeast }) => ({
        figure,
        at_most: atMost,
        at_least: atLeast,
      })),
    },
    accuracy: 'quoted',
    points: result.front.map(point),
    best: result.best && point(result.best),
    nearest_to_limits: result.nearest && {
      parameters: parametersOf(result.nearest.values),
      figures: result.nearest.figures,
    },
    out_of_reach: result.outOfReach,
    archive_points: result.archive.length,
    evaluations: outcome.evaluations,
    wall_time_s: result.wall,
    hypervolume: outcome.hypervolume,
    stages: outcome.stages,
    phonon_correction: outcome.correction && { method: 'exact', ...outcome.correction },
    explanation: result.explanation && explanationDocument(result.explanation),
  };
}
