import type { Key, Keys, Leaf } from './kinds.js';
import { studyKeys } from './table.js';

/** One key of the study format; `[]` stands for any index. */
export interface KeyEntry {
  /** Such as `pulse.tones[].fwhm`. */
  readonly pattern: string;
  readonly key: Key;
}

function* walk(keys: Keys, prefix: string): Generator<KeyEntry> {
  for (const [name, key] of Object.entries(keys)) {
    const pattern = `${prefix}${name}`;
    yield { pattern, key };
    if (key.kind === 'section') yield* walk(key.keys, `${pattern}.`);
    if (key.kind === 'list') yield* walk(key.item.keys, `${pattern}[].`);
  }
}

/** Every key in the order of the table. */
export const keyEntries: readonly KeyEntry[] = [...walk(studyKeys.keys, '')];

/** Names of keys that hold a dot themselves: figures under goal.limits. */
const dottedNames = new Set(
  keyEntries.flatMap(({ key }) =>
    key.kind === 'section' ? Object.keys(key.keys).filter((name) => name.includes('.')) : [],
  ),
);

/** The keys along a path; a figure under goal.limits is one key, though it holds a dot. */
export function keysOf(path: string): string[] {
  const keys: string[] = [];
  const parts = path.split('.');
  for (let i = 0; i < parts.length; i++) {
    const pair = `${parts[i]}.${parts[i + 1]}`;
    const dotted = keys[keys.length - 1] === 'limits' && dottedNames.has(pair);
    keys.push(dotted ? pair : parts[i]);
    if (dotted) i++;
  }
  return keys;
}

/** The tones may be named without `pulse.` before them. */
export const fullPath = (path: string): string => (/^tones(\.|$)/.test(path) ? `pulse.${path}` : path);

/** `pulse.tones.0.fwhm` → `pulse.tones[].fwhm`. */
export const patternOf = (path: string): string => path.replace(/\.\d+(?=\.|$)/g, '[]');

/** The key at a full path, or null; an index is not checked against any study. */
export function keyAt(path: string): Key | null {
  return keyEntries.find((entry) => entry.pattern === patternOf(path))?.key ?? null;
}

/** The leaf at a path (`tones.0.fwhm` or `pulse.tones.0.fwhm`), or null. */
// biome-ignore lint/suspicious/noExplicitAny: the type of its value depends on the path
export function leafAt(path: string): Leaf<any> | null {
  const key = keyAt(fullPath(path));
  return key?.kind === 'leaf' ? key : null;
}

/** Where free parameters may stand, as messages say it: derived, so that it cannot go stale. */
export function freePlaces(): string {
  const free = keyEntries.filter(
    ({ key }) => key.kind === 'leaf' && key.rule.kind === 'quantity' && key.rule.free,
  );
  const byParent = new Map<string, string[]>();
  for (const { pattern } of free) {
    const dot = pattern.lastIndexOf('.');
    const names = byParent.get(pattern.slice(0, dot)) ?? [];
    byParent.set(pattern.slice(0, dot), [...names, pattern.slice(dot + 1)]);
  }
  return [...byParent].map(([parent, names]) => `${parent} (${names.join(', ')})`).join(' and ');
}
