import { applyParameters, type FreeParameter } from '../../optimizers/index.js';
import { type Corner, checkText } from '../report/check-text.js';
import { designFacts } from '../report/derived.js';
import { formatFault, formatRemark, readStudy, type Study, type StudyResult } from '../study/index.js';
import type { Command, Context, ExitCode } from './contract.js';
import { describeParameter } from './fixed-design.js';
import { assignments, JSON_OPTION, SET_OPTION } from './options.js';
import { readBytes } from './study-file.js';

export const CHECK_FORMAT = 'pulsewright.check/1';

const lowest = (p: FreeParameter): number => (p.kind === 'list' ? Math.min(...p.values) : p.from);
const highest = (p: FreeParameter): number => (p.kind === 'list' ? Math.max(...p.values) : p.to);

/** The one design of a study, or the two with every free parameter at its lowest and at its highest value. */
function corners(study: Study): Corner[] {
  const at = (name: string, end: (p: FreeParameter) => number): Corner => ({
    name,
    facts: designFacts(study, applyParameters(study, study.parameters.map(end))),
  });
  if (study.parameters.length === 0) return [at('fixed', lowest)];
  return [at('all lowest', lowest), at('all highest', highest)];
}

function faulty(faults: Extract<StudyResult, { kind: 'faults' }>, json: boolean, context: Context): ExitCode {
  if (json) context.print(JSON.stringify({ format: CHECK_FORMAT, faults: faults.faults }, null, 2));
  else for (const fault of faults.faults) context.note(formatFault(fault));
  return 2;
}

export const check: Command = {
  configure: (yargs) =>
    yargs
      .positional('study', { type: 'string', describe: 'study file', demandOption: true })
      .option('set', SET_OPTION)
      .option('json', JSON_OPTION)
      .example('pulsewright check study.yaml', 'bandwidth, energy, distance from each line, …')
      .example(
        'pulsewright check study.yaml --json',
        'the same, or all faults with their places, for a program',
      ),
  async run(args, context) {
    const path = String(args['study']);
    const json = args['json'] === true;
    const result = readStudy(await readBytes(path), path, assignments(args['set'] as unknown[]));
    if (result.kind === 'faults') return faulty(result, json, context);
    const { study, remarks, hash } = result;
    const designs = corners(study);
    const free = study.parameters.map((p) => ({ path: p.path, allowed: describeParameter(p) }));
    const ties = study.ties.map((tie) => ({ path: tie.path, same_as: tie.sameAs }));
    if (json) {
      const facts = designs.map((corner) => ({ at: corner.name, ...corner.facts }));
      const head = { format: CHECK_FORMAT, title: study.title, hash, faults: [], remarks };
      context.print(JSON.stringify({ ...head, parameters: free, ties, designs: facts }, null, 2));
      return 0;
    }
    const listed = [
      ...free.map((p) => `${p.path}: ${p.allowed}`),
      ...ties.map((t) => `${t.path}: the same as ${t.same_as}`),
    ];
    context.print(`${path}: ${study.title === '' ? 'a sound study' : study.title}\n`);
    context.print(checkText(study, designs, listed, context.color));
    if (remarks.length > 0) context.print(`\n${remarks.map(formatRemark).join('\n')}`);
    return 0;
  },
};
