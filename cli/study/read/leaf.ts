import { type Dimension, describeDimension, quoteFound } from '../../../core/index.js';
import type { Interval, Leaf } from '../keys/kinds.js';
import { nearestName } from '../nearest.js';
import { describeFound, type Placed } from '../source/placed.js';
import type { FieldState, ReadContext } from './context.js';
import { readFree } from './free.js';
import { readQuantity } from './quantity.js';

/** The value of a leaf that stands in the file; undefined with a fault in the context when it is none. */
export function readLeaf(leaf: Leaf<unknown>, node: Placed, path: string, context: ReadContext): unknown {
  const { rule } = leaf;
  const fault = (wanted: string) => context.fault(node.at, path, describeFound(node), wanted);
  const value = node.kind === 'scalar' ? node.value : undefined;
  switch (rule.kind) {
    case 'quantity':
      return readQuantity(node, path, rule.dimension, rule.bounds, context);
    case 'interval':
      return readInterval(node, path, rule.dimension, context);
    case 'integer': {
      const ok =
        typeof value === 'number' && Number.isSafeInteger(value) && value >= rule.from && value <= rule.to;
      const top = rule.to < Number.MAX_SAFE_INTEGER ? ` to ${rule.to}` : ' on';
      return ok ? value : fault(`a whole number from ${rule.from}${top}`);
    }
    case 'choice': {
      if (typeof value === 'string' && rule.values.includes(value)) return value;
      const near = typeof value === 'string' ? nearestName(value, rule.values) : null;
      return fault(`one of ${rule.values.join(', ')}${near === null ? '' : ` (nearest: ${near})`}`);
    }
    case 'text': {
      const ok = typeof value === 'string' && value.length <= rule.longest && !/\p{Cc}/u.test(value);
      return ok ? value : fault(`one line of text, at most ${rule.longest} characters`);
    }
    case 'version': {
      if (value === rule.version) return value;
      const found =
        typeof value === 'number' ? `format ${quoteFound(describeFound(node))}` : describeFound(node);
      return context.fault(
        node.at,
        path,
        found,
        `format ${rule.version}, the only one that this version reads`,
      );
    }
  }
}

function readInterval(
  node: Placed,
  path: string,
  dimension: Dimension,
  context: ReadContext,
): Interval | undefined {
  if (node.kind !== 'list' || node.items.length !== 2) {
    const wanted = `two values, [lowest, highest], each ${describeDimension(dimension)}`;
    return context.fault(node.at, path, describeFound(node), wanted);
  }
  const [from, to] = node.items.map((item, i) => readQuantity(item, `${path}.${i}`, dimension, {}, context));
  if (from === undefined || to === undefined) return undefined;
  if (from < to) return { from, to };
  const found = node.items.map(describeFound).join(' before ');
  return context.fault(node.at, path, found, 'the lower value first and the higher one second');
}

/** What stands at a key that can be free. */
export function readField(leaf: Leaf<number>, node: Placed, path: string, context: ReadContext): FieldState {
  const { rule } = leaf;
  if (rule.kind === 'quantity' && node.kind !== 'scalar') return readFree(node, path, rule, context);
  const value = readLeaf(leaf, node, path, context);
  return typeof value === 'number' ? { kind: 'fixed', value } : { kind: 'faulty' };
}
