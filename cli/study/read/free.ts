import { quoteFound } from '../../../core/index.js';
import type { Rule } from '../keys/kinds.js';
import { freePlaces, fullPath } from '../keys/paths.js';
import { nearestName } from '../nearest.js';
import { describeFound, type Placed, type PlacedMap } from '../source/placed.js';
import type { FieldState, ReadContext } from './context.js';
import { readQuantity } from './quantity.js';

type QuantityRule = Extract<Rule, { kind: 'quantity' }>;

/** A list longer than this is no catalogue. */
const LONGEST_LIST = 1000;
const FORMS = '{ from, to }, { of: [...] } or { same_as: path }';

/** A mapping or list where a number could stand: a range, a list of allowed values, or a tie. */
export function readFree(node: Placed, path: string, rule: QuantityRule, context: ReadContext): FieldState {
  if (!rule.free) {
    const wanted = `a fixed value; only these can be free: ${freePlaces()}`;
    context.fault(node.at, path, describeFound(node), wanted);
    return { kind: 'faulty' };
  }
  if (node.kind !== 'map') return faulty(context, node, path, `${FORMS} for a free value`);
  const keys = [...node.entries.keys()];
  const allowed = formOf(keys);
  if (!allowed) return faulty(context, node, path, FORMS);
  const unknown = keys.filter((key) => !allowed.includes(key));
  for (const key of unknown) {
    const near = nearestName(key, allowed);
    const wanted = near === null ? `only ${allowed.join(', ')} here` : `${near} (the nearest key here)`;
    context.fault(keyPlace(node, key), `${path}.${key}`, `the unknown key ${quoteFound(key)}`, wanted);
  }
  const state = allowed.includes('of')
    ? readList(node, path, rule, context)
    : allowed.includes('same_as')
      ? readTie(node, path, context)
      : readRange(node, path, rule, context);
  return unknown.length > 0 ? { kind: 'faulty' } : state;
}

function formOf(keys: readonly string[]): readonly string[] | null {
  if (keys.includes('of')) return ['of'];
  if (keys.includes('same_as')) return ['same_as'];
  return keys.includes('from') || keys.includes('to') ? ['from', 'to', 'scale'] : null;
}

function faulty(context: ReadContext, node: Placed, path: string, wanted: string): FieldState {
  context.fault(node.at, path, describeFound(node), wanted);
  return { kind: 'faulty' };
}

const keyPlace = (node: PlacedMap, key: string) => node.entries.get(key)?.keyAt ?? node.at;

function readRange(node: PlacedMap, path: string, rule: QuantityRule, context: ReadContext): FieldState {
  const end = (key: 'from' | 'to') => {
    const entry = node.entries.get(key);
    if (entry) return readQuantity(entry.value, `${path}.${key}`, rule.dimension, rule.bounds, context);
    return context.fault(node.at, path, `a range without ${key}`, `both ends: { from, to }`);
  };
  const from = end('from');
  const to = end('to');
  const scale = readScale(node, path, context);
  if (from === undefined || to === undefined || scale === undefined) return { kind: 'faulty' };
  const textOf = (key: string) => describeFound((node.entries.get(key) as { value: Placed }).value);
  if (!(from < to)) {
    const kind = from === to ? 'an empty range' : 'a reversed range';
    context.fault(
      keyPlace(node, 'from'),
      path,
      `${kind} from ${textOf('from')} to ${textOf('to')}`,
      'from below to',
    );
    return { kind: 'faulty' };
  }
  if (!Number.isFinite(to - from)) {
    const found = `a range from ${textOf('from')} to ${textOf('to')}`;
    context.fault(keyPlace(node, 'from'), path, found, 'a range whose width is a finite number');
    return { kind: 'faulty' };
  }
  if (scale === 'log' && !(from > 0)) {
    const at = (node.entries.get('from') as { value: Placed }).value.at;
    context.fault(
      at,
      `${path}.from`,
      `${textOf('from')} with scale: log`,
      'a start above zero, or scale: linear',
    );
    return { kind: 'faulty' };
  }
  return { kind: 'range', from, to, scale };
}

function readScale(node: PlacedMap, path: string, context: ReadContext): 'linear' | 'log' | undefined {
  const value = node.entries.get('scale')?.value;
  if (!value) return 'linear';
  if (value.kind === 'scalar' && (value.value === 'linear' || value.value === 'log')) return value.value;
  return context.fault(value.at, `${path}.scale`, describeFound(value), 'linear or log');
}

function readList(node: PlacedMap, path: string, rule: QuantityRule, context: ReadContext): FieldState {
  const list = (node.entries.get('of') as { value: Placed }).value;
  if (list.kind !== 'list' || list.items.length === 0 || list.items.length > LONGEST_LIST) {
    return faulty(context, list, `${path}.of`, `a list of 1 to ${LONGEST_LIST} values`);
  }
  const values: number[] = [];
  let complete = true;
  list.items.forEach((item, i) => {
    const itemPath = `${path}.of.${i}`;
    const value = readQuantity(item, itemPath, rule.dimension, rule.bounds, context);
    if (value === undefined) complete = false;
    else if (values.includes(value)) {
      complete = false;
      context.fault(item.at, itemPath, `${describeFound(item)} again`, 'each value once');
    } else values.push(value);
  });
  return complete ? { kind: 'list', values } : { kind: 'faulty' };
}

function readTie(node: PlacedMap, path: string, context: ReadContext): FieldState {
  const target = (node.entries.get('same_as') as { value: Placed }).value;
  if (target.kind !== 'scalar' || typeof target.value !== 'string' || target.value === '') {
    return faulty(context, target, `${path}.same_as`, 'a path such as tones.0.fwhm');
  }
  return { kind: 'tie', target: fullPath(target.value), at: target.at };
}
