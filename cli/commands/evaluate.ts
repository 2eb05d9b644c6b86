import { type Design, evaluate, type Figures, type FigureTree, trace } from '../../core/index.js';
import { figuresText } from '../report/figures-table.js';
import { csv } from '../run/csv.js';
import { writeWhole } from '../run/whole-file.js';
import { biasOf } from '../study/index.js';
import type { Command } from './contract.js';
import { fixedDesign } from './fixed-design.js';
import { assignments, JSON_OPTION, once, SET_OPTION } from './options.js';
import { loadStudy } from './study-file.js';

export const FIGURES_FORMAT = 'pulsewright.figures/1';

/** One tree of figures with its fields in the documented order. */
function treeDocument(tree: FigureTree): Omit<FigureTree, 'notes'> {
  const { emitted, filtered, signal, collected, populations, pulse, phonons, accuracy } = tree;
  return { emitted, filtered, signal, collected, populations, pulse, phonons, accuracy };
}

/**
 * The JSON document of `evaluate`: numbers in full double precision, absent things null.
 * @param bias bias to set, mV; null without tuning
 */
export function figuresDocument(figures: Figures, bias: number | null): unknown {
  const { emitted, filtered, signal, collected, ...rest } = treeDocument(figures);
  const nominal = figures.nominal && { ...treeDocument(figures.nominal), notes: figures.nominal.notes };
  return {
    format: FIGURES_FORMAT,
    ...{ emitted, filtered, signal, collected, nominal, quantile: figures.quantile },
    ...rest,
    bias_mv: bias,
    notes: figures.notes,
  };
}

/** Envelope and populations against time as CSV. */
function traceCsv(design: Design, title: string): string {
  const { levels, components, points } = trace(design);
  const drives = components.flatMap((name) => {
    const path = name === 'drive' ? 'drive' : `drive.${name}`;
    return [`${path}.re [1/ps]`, `${path}.im [1/ps]`];
  });
  const comments = [
    'pulsewright.trace/1',
    `study: ${title}`,
    `drive: complex envelope Ω(t) in the frame of the pulse reference (${design.pulse.reference})`,
    'without drift',
  ];
  return csv(
    comments,
    ['time [ps]', ...drives, ...levels.map((level) => `populations.${level}`)],
    points.map((point) => [point.time, ...point.drive, ...point.populations]),
  );
}

export const evaluateCommand: Command = {
  configure: (yargs) =>
    yargs
      .positional('study', { type: 'string', describe: 'study file', demandOption: true })
      .option('set', SET_OPTION)
      .option('trace', {
        type: 'string',
        requiresArg: true,
        describe: 'write envelope and populations against time to this CSV file',
        coerce: once('trace'),
      })
      .option('json', JSON_OPTION)
      .example('pulsewright evaluate run/designs/best.yaml', 'figures of the best design of a run')
      .example(
        'pulsewright evaluate study.yaml --set "pulse.tones.0.area=1 pi" --set "pulse.tones.0.fwhm=8 ps"',
        'fix free parameters first',
      )
      .example('pulsewright evaluate design.yaml --trace trace.csv', 'what happens during the pulse'),
  async run(args, context) {
    const file = await loadStudy(String(args['study']), assignments(args['set'] as unknown[]));
    const design = fixedDesign(file, 'evaluate');
    const figures = evaluate(design, 'quoted');
    const bias = biasOf(file.study, design);
    const target = args['trace'] as string | undefined;
    if (target !== undefined) await writeWhole(target, traceCsv(design, file.study.title || file.path));
    if (args['json']) context.print(JSON.stringify(figuresDocument(figures, bias), null, 2));
    else context.print(figuresText(file.study.title || file.path, figures, bias, context.color));
    if (target !== undefined) context.note(`trace: ${target}`);
    return 0;
  },
};
