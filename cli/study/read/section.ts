import { describeDimension, quoteFound } from '../../../core/index.js';
import type { Place } from '../contract.js';
import { camelCase, type Key, type Leaf, type List, type ReadOf, type Section } from '../keys/kinds.js';
import { keyEntries } from '../keys/paths.js';
import { nearestName } from '../nearest.js';
import { describeFound, type Placed, type PlacedMap } from '../source/placed.js';
import type { Field, FieldState, ReadContext } from './context.js';
import { readFree } from './free.js';
import { readField, readLeaf } from './leaf.js';

type Values = Record<string, unknown>;

/** Reads a section by its keys: every fault into the context, undefined for what is faulty, defaults for what is absent. */
export function readSection<S extends Section>(
  section: S,
  node: Placed,
  at: Place,
  path: string,
  context: ReadContext,
): ReadOf<S> {
  if (node.kind !== 'map') {
    const wanted = `a mapping with ${Object.keys(section.keys).join(', ')}`;
    context.fault(node.at, path, describeFound(node), wanted);
    return undefined as ReadOf<S>;
  }
  reportUnknown(section, node, path, context);
  const values: Values = {};
  for (const [name, key] of Object.entries(section.keys)) {
    const entry = node.entries.get(name);
    const keyPath = path === '' ? name : `${path}.${name}`;
    const field = camelCase(name);
    if (key.kind === 'leaf') readLeafInto(values, field, key, entry?.value ?? null, at, keyPath, context);
    else if (entry) values[field] = readInner(key, entry.value, entry.keyAt, keyPath, context);
    else values[field] = absent(key, at, keyPath, context);
  }
  return values as ReadOf<S>;
}

function reportUnknown(section: Section, node: PlacedMap, path: string, context: ReadContext): void {
  const known = Object.keys(section.keys);
  for (const [name, entry] of node.entries) {
    if (Object.hasOwn(section.keys, name)) continue;
    const keyPath = path === '' ? quoteFound(name) : `${path}.${quoteFound(name)}`;
    const elsewhere = keyEntries
      .filter(({ pattern }) => lastName(pattern) === name)
      .map(({ pattern }) => pattern);
    const near = nearestName(name, known);
    const wanted =
      near !== null && elsewhere.length === 0
        ? `${near} (the nearest key here)`
        : `one of ${known.join(', ')}${elsewhere.length > 0 ? `; ${name} belongs at ${elsewhere.join(', ')}` : ''}`;
    context.fault(entry.keyAt, keyPath, `the unknown key ${quoteFound(name)}`, wanted);
  }
}

const lastName = (pattern: string): string => pattern.slice(pattern.lastIndexOf('.') + 1);

function readLeafInto(
  values: Values,
  name: string,
  leaf: Leaf<unknown>,
  node: Placed | null,
  at: Place,
  path: string,
  context: ReadContext,
): void {
  const { rule, presence } = leaf;
  if (node === null && presence.kind === 'required') {
    context.fault(at, path, 'nothing', describeLeaf(leaf));
  }
  const fallback = presence.kind === 'value' ? presence.value : presence.kind === 'none' ? null : undefined;
  if (rule.kind !== 'quantity' || !rule.free) {
    const loose = node !== null && node.kind !== 'scalar' && rule.kind === 'quantity' && isFreeForm(node);
    if (loose) readFree(node, path, rule, context);
    values[name] = node === null ? fallback : loose ? undefined : readLeaf(leaf, node, path, context);
    return;
  }
  const state: FieldState =
    node === null
      ? typeof fallback === 'number'
        ? { kind: 'fixed', value: fallback }
        : { kind: 'faulty' }
      : readField(leaf as Leaf<number>, node, path, context);
  values[name] = startOf(state);
  const assign = (value: number) => {
    values[name] = value;
  };
  const field: Field = { path, leaf: leaf as Leaf<number>, at: node?.at ?? at, state, assign };
  context.fields.set(path, field);
}

const isFreeForm = (node: Placed): boolean =>
  node.kind === 'map' && ['from', 'to', 'of', 'same_as'].some((key) => node.entries.has(key));

/** A free value holds the start of its range or list; a tie is undefined until it is resolved. */
function startOf(state: FieldState): number | undefined {
  if (state.kind === 'fixed') return state.value;
  if (state.kind === 'range') return state.from;
  return state.kind === 'list' ? state.values[0] : undefined;
}

function readInner(
  key: Section | List,
  node: Placed,
  at: Place,
  path: string,
  context: ReadContext,
): unknown {
  if (key.kind === 'section') return readSection(key, node, at, path, context);
  if (node.kind !== 'list' || node.items.length === 0 || node.items.length > key.longest) {
    return context.fault(
      node.at,
      path,
      describeFound(node),
      `a list of 1 to ${key.longest} (each begins with "- ")`,
    );
  }
  const items = node.items.map((item, i) => readSection(key.item, item, item.at, `${path}.${i}`, context));
  return items.includes(undefined) ? undefined : items;
}

function absent(key: Exclude<Key, Leaf<unknown>>, at: Place, path: string, context: ReadContext): unknown {
  if (key.kind === 'list' || key.presence === 'required') {
    const what = key.kind === 'list' ? 'a list' : `a mapping with ${Object.keys(key.keys).join(', ')}`;
    return context.fault(at, path, 'nothing', `${what} (${key.help})`);
  }
  if (key.presence === 'none') return null;
  const empty: PlacedMap = { kind: 'map', at, entries: new Map() };
  return readSection(key, empty, at, path, context);
}

function describeLeaf(leaf: Leaf<unknown>): string {
  const { rule } = leaf;
  if (rule.kind === 'quantity') return `${describeDimension(rule.dimension)} (${leaf.help})`;
  if (rule.kind === 'choice') return `one of ${rule.values.join(', ')} (${leaf.help})`;
  return leaf.help;
}
