import { type Design, emitterModels, exactQuantity } from '../../../core/index.js';
import { applyParameters } from '../../../optimizers/index.js';
import type { Study } from '../contract.js';
import { camelCase, type Interval, type Key, type Leaf, type Section } from '../keys/kinds.js';
import { FORMAT_VERSION, studyKeys } from '../keys/table.js';

/** A study file with the free parameters at `values` (internal units, in their order): see `writeStudyFile`. */
export function writeDesign(study: Study, values: readonly number[], title: string): string {
  return writeStudyFile(study, applyParameters(study, values), title);
}

/**
 * A complete study file (YAML) with every value of the design fixed; goal and search are those of the study. Reading
 * it back gives the same numbers bit for bit. Throws when the design holds a number that is not finite.
 */
export function writeStudyFile(study: Study, design: Design, title: string): string {
  const { goal, search, tuning } = study;
  const emitter = { ...design.emitter, tuning };
  const limits = Object.fromEntries(goal.limits.map((limit) => [camelCase(limit.figure), limit]));
  const content = {
    pulsewright: FORMAT_VERSION,
    title,
    ...{ ...design, emitter, drift: design.drift && driftValues(design.drift) },
    goal: { ...goal, limits: goal.limits.length > 0 ? limits : null },
    search,
  };
  const biexciton = emitterModels.find(({ name }) => name === design.emitter.model)?.hasBiexciton ?? false;
  const lines = ['# A design with fixed values; every number is exact to the last bit.'];
  lines.push(...sectionLines(studyKeys, content as unknown as Values, biexciton));
  return `${lines.join('\n')}\n`;
}

/** The drift in the keys of a study file. */
function driftValues({ quantile, ...rms }: NonNullable<Design['drift']>): Values {
  return quantile === null ? { ...rms, judge: 'mean' } : { ...rms, judge: 'quantile', quantile };
}

type Values = Readonly<Record<string, unknown>>;

function sectionLines(section: Section, values: Values, biexciton: boolean): string[] {
  return Object.entries(section.keys).flatMap(([name, key]) => {
    const value = values[camelCase(name)];
    const left = (value ?? null) === null || (key.kind === 'leaf' && key.only === 'biexciton' && !biexciton);
    return left ? [] : keyLines(name, key, value, biexciton);
  });
}

function keyLines(name: string, key: Key, value: unknown, biexciton: boolean): string[] {
  if (key.kind === 'leaf' && key.rule.kind === 'interval') {
    const { dimension } = key.rule;
    const { from, to } = value as Interval;
    return [`${name}:`, ...indent([from, to].map((end) => `- ${exactQuantity(end, dimension)}`))];
  }
  if (key.kind === 'leaf') return [`${name}: ${leafText(key, value)}`];
  if (key.kind === 'section') return [`${name}:`, ...indent(sectionLines(key, value as Values, biexciton))];
  const items = (value as readonly Values[]).flatMap((item) => {
    const [first, ...rest] = sectionLines(key.item, item, biexciton);
    return [`- ${first}`, ...indent(rest)];
  });
  return [`${name}:`, ...indent(items)];
}

const indent = (lines: readonly string[]): string[] => lines.map((line) => `  ${line}`);

function leafText(leaf: Leaf<unknown>, value: unknown): string {
  if (leaf.rule.kind === 'quantity') return exactQuantity(value as number, leaf.rule.dimension);
  // A JSON string is a YAML string, whatever is in it.
  return leaf.rule.kind === 'text' ? JSON.stringify(value) : String(value);
}
