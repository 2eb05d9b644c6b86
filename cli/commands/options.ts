import { availableParallelism } from 'node:os';
import { UserError } from '../run/user-error.js';
import type { Override } from '../study/index.js';

/** An option given once, as text; yargs hands over an array when it stands twice. */
export function once(name: string): (value: unknown) => string | undefined {
  return (value) => {
    if (value === undefined) return undefined;
    if (Array.isArray(value)) throw new UserError(`--${name}: given ${value.length} times; allowed once`);
    if (value === '') throw new UserError(`--${name}: got nothing; needs a value`);
    return String(value);
  };
}

const MOST_WORKERS = 256;

/** Number of worker threads; the available cores when not given. */
export function workerCount(value: unknown): number {
  const text = once('workers')(value);
  if (text === undefined) return availableParallelism();
  const count = /^\d{1,6}$/.test(text) ? Number(text) : 0;
  if (count < 1 || count > MOST_WORKERS) {
    throw new UserError(`--workers: got ${text}; needs a whole number from 1 to ${MOST_WORKERS}`);
  }
  return count;
}

/** `--json` of every command that has a result. */
export const JSON_OPTION = {
  type: 'boolean',
  default: false,
  describe: 'print one JSON document on stdout instead of tables',
} as const;

export const SET_OPTION = {
  type: 'string',
  array: true,
  nargs: 1,
  default: [] as string[],
  describe: 'value at a path of the study: --set "pulse.tones.0.area=1.2 pi"',
} as const;

/** `path=value` pairs of `--set`; the values stay text with unit, as in a study. */
export function assignments(values: readonly unknown[]): Override[] {
  const out: Override[] = [];
  for (const value of values) {
    const text = String(value);
    const at = text.indexOf('=');
    if (at < 1 || at === text.length - 1) {
      throw new UserError(`--set: got "${text}"; needs path=value, such as "pulse.tones.0.area=1.2 pi"`);
    }
    const path = text.slice(0, at).trim();
    if (out.some((o) => o.path === path)) throw new UserError(`--set: ${path} is given twice`);
    out.push({ path, value: text.slice(at + 1).trim() });
  }
  return out;
}
