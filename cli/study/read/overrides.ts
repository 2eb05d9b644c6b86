import { quoteFound } from '../../../core/index.js';
import type { Fault, Override, Place } from '../contract.js';
import type { Key } from '../keys/kinds.js';
import { fullPath, keyAt, keyEntries, keysOf, patternOf } from '../keys/paths.js';
import { nearestName } from '../nearest.js';
import { readDocument } from '../source/document.js';
import { locate, type Placed, type PlacedMap } from '../source/placed.js';

/** The file that faults in an override name; columns count in the text `path=value`. */
export const OVERRIDE_FILE = '--set';

/** Puts each override into the tree (changed in place). A value that is empty or null takes its key away. */
export function applyOverrides(root: Placed, overrides: readonly Override[]): Fault[] {
  return overrides.flatMap((override) => applyOne(root, override));
}

function applyOne(root: Placed, override: Override): readonly Fault[] {
  const start: Place = { file: OVERRIDE_FILE, line: 1, column: 1 };
  const path = fullPath(override.path);
  const fault = (found: string, wanted: string): Fault[] => [
    { ...start, path: quoteFound(path), found, wanted },
  ];
  if (keyAt(path) === null) {
    const patterns = keyEntries.filter(({ key }: { key: Key }) => key.kind === 'leaf').map((e) => e.pattern);
    const near = nearestName(patternOf(path), patterns);
    const index = /\.(\d+)(?=\.|$)/.exec(path)?.[1] ?? '0';
    const wanted =
      near === null ? 'a path such as tones.0.fwhm' : `${near.replace('[]', `.${index}`)} (the nearest path)`;
    return fault(`the unknown path ${quoteFound(override.path)}`, wanted);
  }
  const { root: value, faults } = readDocument(override.value, OVERRIDE_FILE, override.path.length + 1);
  if (value === null || faults.length > 0) return faults.map((f) => ({ ...f, path }));
  return put(root, keysOf(path), value, start) ? [] : fault(`the path ${path}`, whatIsThere(root, path));
}

/** False when the path leads through something that is not there and cannot be made, such as a tone too many. */
function put(root: Placed, keys: readonly string[], value: Placed, at: Place): boolean {
  let node = root;
  for (const key of keys.slice(0, -1)) {
    if (node.kind === 'list') {
      const item: Placed | undefined = node.items[Number(key)];
      if (!item) return false;
      node = item;
    } else if (node.kind === 'map') {
      let entry = node.entries.get(key);
      if (!entry) {
        const made: PlacedMap = { kind: 'map', at, entries: new Map() };
        entry = { keyAt: at, value: made };
        node.entries.set(key, entry);
      }
      node = entry.value;
    } else return false;
  }
  const last = keys[keys.length - 1];
  if (node.kind !== 'map') return false;
  if (value.kind === 'scalar' && value.value === null) node.entries.delete(last);
  else node.entries.set(last, { keyAt: at, value });
  return true;
}

function whatIsThere(root: Placed, path: string): string {
  const list = /^(.*?)\.\d+(\.|$)/.exec(path);
  const place = list ? locate(root, list[1]) : null;
  if (!place?.exact || place.node.kind !== 'list') return 'a path of this study';
  return `an index from 0 to ${place.node.items.length - 1}: the study has ${place.node.items.length} at ${list?.[1]}`;
}
