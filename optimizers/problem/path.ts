import type { Design } from '../../core/index.js';
import type { ProblemSpec, Tie } from './contract.js';

/** `biexciton_lifetime` → `biexcitonLifetime`: study files write keys in snake case, designs in camel case. */
function fieldName(key: string): string {
  return key.replace(/_([a-z])/g, (_, letter: string) => letter.toUpperCase());
}

type Node = Record<string, unknown>;

function descend(root: Design, path: string): { parent: Node; key: string } {
  const keys = path.split('.').map(fieldName);
  let parent = root as unknown as Node;
  for (const key of keys.slice(0, -1)) {
    const next = parent[key];
    if (next === null || typeof next !== 'object') throw new Error(`${path}: the design has no ${key}`);
    parent = next as Node;
  }
  const key = keys[keys.length - 1];
  if (typeof parent[key] !== 'number') throw new Error(`${path}: the design has no number there`);
  return { parent, key };
}

/** The number at a study-file path such as `pulse.tones.0.fwhm`, internal units. Throws when there is none. */
export function getPath(design: Design, path: string): number {
  const { parent, key } = descend(design, path);
  return parent[key] as number;
}

/** Follows ties to the path that is not tied itself; throws on a circle. */
export function rootOf(tie: Tie, ties: ReadonlyMap<string, Tie>): string {
  const seen = new Set<string>([tie.path]);
  let path = tie.sameAs;
  for (let next = ties.get(path); next !== undefined; next = ties.get(path)) {
    if (seen.has(path)) throw new Error(`${tie.path}: tied in a circle through ${path}`);
    seen.add(path);
    path = next.sameAs;
  }
  return path;
}

/** A copy in which nothing is shared: two tones may be the same object in the specification. */
function copy<T>(value: T): T {
  if (Array.isArray(value)) return value.map(copy) as T;
  if (value === null || typeof value !== 'object') return value;
  return Object.fromEntries(Object.entries(value).map(([key, part]) => [key, copy(part)])) as T;
}

/**
 * The design with the free parameters at `values` (internal units, order of `spec.parameters`) and every tie kept.
 * The specification is not changed. Throws when a path does not lead to a number or ties form a circle.
 */
export function applyParameters(spec: ProblemSpec, values: readonly number[]): Design {
  if (values.length !== spec.parameters.length) {
    throw new Error(`got ${values.length} values; the problem has ${spec.parameters.length} free parameters`);
  }
  const design = copy(spec.design);
  spec.parameters.forEach((parameter, i) => {
    const { parent, key } = descend(design, parameter.path);
    parent[key] = values[i];
  });
  const ties = new Map(spec.ties.map((tie) => [tie.path, tie]));
  for (const tie of spec.ties) {
    const { parent, key } = descend(design, tie.path);
    parent[key] = getPath(design, rootOf(tie, ties));
  }
  return design;
}
