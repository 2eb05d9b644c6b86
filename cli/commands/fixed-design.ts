import type { Design } from '../../core/index.js';
import type { FreeParameter } from '../../optimizers/index.js';
import { readable } from '../run/parameters.js';
import { UserError } from '../run/user-error.js';
import type { StudyFile } from './study-file.js';

/** What a free parameter may be, with units. */
export function describeParameter(parameter: FreeParameter): string {
  const { path } = parameter;
  if (parameter.kind === 'list') return `one of ${parameter.values.map((v) => readable(v, path)).join(', ')}`;
  const scale = parameter.scale === 'log' ? ', logarithmic' : '';
  return `from ${readable(parameter.from, path)} to ${readable(parameter.to, path)}${scale}`;
}

/** A value that the parameter may take, as an example. */
function example(parameter: FreeParameter): string {
  const value = parameter.kind === 'list' ? parameter.values[0] : parameter.from;
  return readable(value, parameter.path);
}

/**
 * The design of a study without free parameters.
 * @throws UserError that lists the free ones and how to set them
 */
export function fixedDesign({ path, study }: StudyFile, purpose: string): Design {
  if (study.parameters.length === 0) return study.design;
  const lines = study.parameters.map((p) => `  ${p.path}: ${describeParameter(p)}`);
  const options = study.parameters.map((p) => `--set "${p.path}=${example(p)}"`);
  throw new UserError(
    [
      `${path}: has free parameters; ${purpose} needs a value for each:`,
      ...lines,
      `give them by: ${options.join(' ')}`,
    ].join('\n'),
  );
}
