import { isAlias, isMap, isScalar, isSeq, type Node, type Pair, parseDocument } from 'yaml';
import { quoteFound } from '../../../core/index.js';
import type { Fault, Place } from '../contract.js';
import type { Placed, PlacedMap } from './placed.js';
import { nestingFault } from './text.js';

/** Values that a tree may hold once its aliases are followed; aliases can otherwise multiply without end. */
const MAX_VALUES = 20_000;
const MAX_DEPTH = 32;
/** Syntax faults follow from one another: more than these help nobody. */
const MAX_SYNTAX_FAULTS = 5;

export interface PlacedDocument {
  /** Null when nothing could be read. */
  readonly root: Placed | null;
  readonly faults: readonly Fault[];
}

/** Reads YAML (or JSON) into a placed tree. `shift` moves the columns of the first line. */
export function readDocument(text: string, file: string, shift = 0): PlacedDocument {
  const tooDeep = nestingFault(text, file);
  if (tooDeep) return { root: null, faults: [tooDeep] };
  const document = parseDocument(text, {
    prettyErrors: false,
    uniqueKeys: false,
  });
  const placeAt = placer(text, file, shift);
  const syntax = [...document.errors, ...document.warnings].slice(0, MAX_SYNTAX_FAULTS);
  if (syntax.length > 0) {
    const faults = syntax.map((e) => ({
      ...placeAt(e.pos[0]),
      path: '',
      found: `bad YAML (${quoteFound(e.message)})`,
      wanted: e.code === 'TAB_AS_INDENT' ? 'spaces as indentation' : 'a YAML or JSON document',
    }));
    return { root: null, faults };
  }
  const walker = new Walker(placeAt, text);
  const root = walker.convert(document.contents as Node | null, '', 0);
  return { root: walker.full ? null : root, faults: walker.faults };
}

/** Places of offsets. Not the parser's own line counter: it stops where the parser does. */
function placer(text: string, file: string, shift: number): (offset: number) => Place {
  const starts = [0];
  for (let i = text.indexOf('\n'); i >= 0; i = text.indexOf('\n', i + 1)) starts.push(i + 1);
  return (offset) => {
    const end = Math.min(offset, text.length);
    let [low, high] = [0, starts.length];
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (starts[middle] <= end) low = middle;
      else high = middle;
    }
    return { file, line: low + 1, column: end - starts[low] + 1 + (low === 0 ? shift : 0) };
  };
}

class Walker {
  readonly faults: Fault[] = [];
  full = false;
  private count = 0;
  private readonly anchors = new Map<string, Node>();

  constructor(
    private readonly placeAt: (offset: number) => Place,
    private readonly source: string,
  ) {}

  convert(node: Node | null, path: string, depth: number): Placed {
    const at = this.placeAt(node?.range?.[0] ?? 0);
    const nothing: Placed = { kind: 'scalar', at, value: null, text: '' };
    if (this.full) return nothing;
    if (++this.count > MAX_VALUES || depth > MAX_DEPTH) {
      this.full = true;
      const wanted = `at most ${MAX_VALUES} values, ${MAX_DEPTH} levels deep`;
      this.faults.push({
        ...at,
        path,
        found: 'too many or too deep values (an alias counts as what it stands for)',
        wanted,
      });
      return nothing;
    }
    if (node === null) return nothing;
    if (isAlias(node)) return this.follow(node.source, at, path, depth);
    if ('anchor' in node && typeof node.anchor === 'string') this.anchors.set(node.anchor, node);
    if (isMap(node)) return this.map(node.items as Pair<Node, Node | null>[], at, path, depth);
    if (isSeq(node)) {
      const items = (node.items as Node[]).map((item, i) => this.convert(item, join(path, i), depth + 1));
      return { kind: 'list', at, items };
    }
    return this.scalar(node, at);
  }

  private follow(anchor: string, at: Place, path: string, depth: number): Placed {
    const target = this.anchors.get(anchor);
    if (target) return this.convert(target, path, depth + 1);
    this.faults.push({
      ...at,
      path,
      found: `*${quoteFound(anchor)}`,
      wanted: 'an anchor that stands before it',
    });
    return { kind: 'scalar', at, value: null, text: '' };
  }

  private map(pairs: Pair<Node, Node | null>[], at: Place, path: string, depth: number): PlacedMap {
    const entries: PlacedMap['entries'] = new Map();
    for (const pair of pairs) {
      const keyAt = this.placeAt(pair.key?.range?.[0] ?? 0);
      const name = isScalar(pair.key) && typeof pair.key.value === 'string' ? pair.key.value : null;
      const valueNode = pair.value ?? null;
      const value = this.convert(valueNode, join(path, name ?? '?'), depth + 1);
      const placed = valueNode === null ? { ...value, at: keyAt } : value;
      if (name === null) {
        const found = `the key ${quoteFound(this.textOf(pair.key))}`;
        this.faults.push({ ...keyAt, path, found, wanted: 'a name as key' });
      } else if (entries.has(name)) {
        const found = `the key ${quoteFound(name)} again`;
        this.faults.push({ ...keyAt, path: join(path, name), found, wanted: 'each key once' });
      } else entries.set(name, { keyAt, value: placed });
    }
    return { kind: 'map', at, entries };
  }

  private scalar(node: Node, at: Place): Placed {
    const value: unknown = isScalar(node) ? node.value : null;
    const plain = typeof value === 'string' || typeof value === 'number' || typeof value === 'boolean';
    if (value !== null && !plain)
      return { kind: 'scalar', at, value: this.textOf(node), text: this.textOf(node) };
    const text = typeof value === 'string' ? value : this.textOf(node);
    return { kind: 'scalar', at, value: plain ? value : null, text };
  }

  private textOf(node: Node | null): string {
    const range = node?.range;
    return range ? this.source.slice(range[0], range[1]) : '';
  }
}

const join = (path: string, key: string | number): string => (path === '' ? `${key}` : `${path}.${key}`);
