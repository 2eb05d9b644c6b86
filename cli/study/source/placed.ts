import { quoteFound } from '../../../core/index.js';
import type { Place } from '../contract.js';

/** A study file as a plain tree in which everything knows its place. */
export type Placed = PlacedScalar | PlacedMap | PlacedList;

export interface PlacedScalar {
  readonly kind: 'scalar';
  readonly at: Place;
  readonly value: string | number | boolean | null;
  /** As it stands in the file. */
  readonly text: string;
}

export interface PlacedEntry {
  readonly keyAt: Place;
  readonly value: Placed;
}

export interface PlacedMap {
  readonly kind: 'map';
  readonly at: Place;
  readonly entries: Map<string, PlacedEntry>;
}

export interface PlacedList {
  readonly kind: 'list';
  readonly at: Place;
  readonly items: Placed[];
}

/** What a message says that it found. */
export function describeFound(node: Placed): string {
  if (node.kind === 'map') {
    return node.entries.size === 0
      ? 'an empty mapping'
      : `a mapping of ${quoteFound([...node.entries.keys()].join(', '))}`;
  }
  if (node.kind === 'list')
    return node.items.length === 0 ? 'an empty list' : `a list of ${node.items.length}`;
  if (node.value === null) return 'nothing';
  return node.text.trim() === '' ? 'an empty text' : quoteFound(node.text);
}

/** Every path of the tree in the order of the file. */
export function* placedPaths(node: Placed, path = ''): Generator<string> {
  if (path !== '') yield path;
  const join = (key: string | number) => (path === '' ? `${key}` : `${path}.${key}`);
  if (node.kind === 'map')
    for (const [key, entry] of node.entries) yield* placedPaths(entry.value, join(key));
  if (node.kind === 'list')
    for (let i = 0; i < node.items.length; i++) yield* placedPaths(node.items[i], join(i));
}

/** Place and node of a path, or of its nearest ancestor that stands in the file. */
export function locate(root: Placed, path: string): { at: Place; node: Placed; exact: boolean } {
  let node = root;
  let at = root.at;
  const keys = path.split('.');
  for (let i = 0; i < keys.length; i++) {
    // A key may hold a dot itself.
    const dotted = `${keys[i]}.${keys[i + 1]}`;
    const key = i + 1 < keys.length && child(node, keys[i]) === undefined ? dotted : keys[i];
    const next = child(node, key);
    if (!next) return { at, node, exact: false };
    if (key === dotted) i++;
    at = next.kind === 'scalar' || node.kind === 'list' ? next.at : keyPlace(node, key);
    node = next;
  }
  return { at, node, exact: true };
}

function child(node: Placed, key: string): Placed | undefined {
  if (node.kind === 'map') return node.entries.get(key)?.value;
  if (node.kind === 'list' && /^\d+$/.test(key)) return node.items[Number(key)];
  return undefined;
}

const keyPlace = (node: Placed, key: string): Place =>
  node.kind === 'map' ? (node.entries.get(key) as PlacedEntry).keyAt : node.at;
