import { type Dimension, describeDimension, dimensionInfo, parseQuantity } from '../../../core/index.js';
import { type Bounds, describeBounds, withinBounds } from '../keys/kinds.js';
import { describeFound, type Placed } from '../source/placed.js';
import type { ReadContext } from './context.js';

/** A number in internal units, or undefined with its fault in the context. */
export function readQuantity(
  node: Placed,
  path: string,
  dimension: Dimension,
  bounds: Bounds,
  context: ReadContext,
): number | undefined {
  const value = parse(node, path, dimension, context);
  if (value === undefined || withinBounds(value, bounds)) return value;
  return context.fault(node.at, path, describeFound(node), describeBounds(bounds, dimension));
}

function parse(node: Placed, path: string, dimension: Dimension, context: ReadContext): number | undefined {
  const wanted = describeDimension(dimension);
  if (node.kind !== 'scalar') return context.fault(node.at, path, describeFound(node), wanted);
  if (typeof node.value === 'number') {
    if (!Number.isFinite(node.value)) return context.fault(node.at, path, describeFound(node), wanted);
    if (dimensionInfo(dimension).bare) return node.value + 0;
    return context.fault(node.at, path, `${describeFound(node)} (no unit)`, wanted);
  }
  if (typeof node.value !== 'string') return context.fault(node.at, path, describeFound(node), wanted);
  const parsed = parseQuantity(node.value, dimension);
  if (parsed.kind === 'fault') return context.fault(node.at, path, parsed.found, parsed.wanted);
  if (parsed.remark !== null) context.remark(node.at, path, parsed.remark);
  return parsed.value;
}
