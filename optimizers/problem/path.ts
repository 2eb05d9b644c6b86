import type { Design } from '../../core/index.js';
import type { ProblemSpec, Tie } from './contract.js';

/** `biexciton_lifetime` → `biexcitonLifetime`: study files write keys in snake case, designs in camel case. */
function fieldName(key: string): string {
  return key.replace(/_([a-z])/g, (_, letter: string) => letter.toUpperCase());
}

type Node = Readonly<Record<string, unknown>>;

const keysOf = memoized((path: string): readonly string[] => path.split('.').map(fieldName));

/** Paths are few and asked for at every evaluation. */
function memoized<T>(of: (path: string) => T): (path: string) => T {
  const known = new Map<string, T>();
  return (path) => {
    let value = known.get(path);
    if (value === undefined) {
      value = of(path);
      known.set(path, value);
    }
    return value;
  };
}

function childOf(node: Node, key: string, path: string): Node {
  const child = node[key];
  if (child === null || typeof child !== 'object') throw new Error(`${path}: the design has no ${key}`);
  return child as Node;
}

function numberAt(node: Node, key: string, path: string): number {
  const value = node[key];
  if (typeof value !== 'number') throw new Error(`${path}: the design has no number there`);
  return value;
}

/** The number at a study-file path such as `pulse.tones.0.fwhm`, internal units. Throws when there is none. */
export function getPath(design: Design, path: string): number {
  const keys = keysOf(path);
  const last = keys.length - 1;
  let node = design as unknown as Node;
  for (let i = 0; i < last; i++) node = childOf(node, keys[i], path);
  return numberAt(node, keys[last], path);
}

function replaced(node: Node, key: string, value: unknown): Node {
  if (!Array.isArray(node)) return { ...node, [key]: value };
  const next = [...node];
  next[Number(key)] = value;
  return next as unknown as Node;
}

function put(node: Node, path: string, value: number, depth: number): Node {
  const keys = keysOf(path);
  const key = keys[depth];
  if (depth < keys.length - 1)
    return replaced(node, key, put(childOf(node, key, path), path, value, depth + 1));
  numberAt(node, key, path);
  return replaced(node, key, value);
}

/** The design with another number at a study-file path; it shares all other parts with the old one. */
function withNumber(design: Design, path: string, value: number): Design {
  return put(design as unknown as Node, path, value, 0) as unknown as Design;
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

/**
 * The design with the free parameters at `values` (internal units, order of `spec.parameters`) and every tie kept.
 * The specification is not changed. Throws when a path does not lead to a number or ties form a circle.
 */
export function applyParameters(spec: ProblemSpec, values: readonly number[]): Design {
  if (values.length !== spec.parameters.length) {
    throw new Error(`got ${values.length} values; the problem has ${spec.parameters.length} free parameters`);
  }
  let design = spec.design;
  spec.parameters.forEach(({ path }, i) => {
    design = withNumber(design, path, values[i]);
  });
  if (spec.ties.length === 0) return design;
  const ties = new Map(spec.ties.map((tie) => [tie.path, tie]));
  for (const tie of spec.ties) design = withNumber(design, tie.path, getPath(design, rootOf(tie, ties)));
  return design;
}
