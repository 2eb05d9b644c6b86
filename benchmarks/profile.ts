/** Seconds of one thread by what they were spent on. */
export interface Parts {
  /** In `evaluate` and its exact derivatives, whoever called it. */
  readonly evaluate: number;
  /** In the rest of the search: methods, stages, archives, ledger lines. */
  readonly strategy: number;
  /** The collector runs apart from the functions whose garbage it takes. */
  readonly collector: number;
  /** Everything else: loading modules, reading the study, drawing, writing. */
  readonly command: number;
  readonly idle: number;
}

interface ProfileNode {
  readonly id: number;
  readonly callFrame: { readonly functionName: string; readonly url: string };
  readonly children?: readonly number[];
}

/** The part of a V8 processor profile that is read. */
interface Profile {
  readonly nodes: readonly ProfileNode[];
  readonly samples: readonly number[];
  /** Time before each sample, µs. */
  readonly timeDeltas: readonly number[];
}

const NAMED = new Map<string, keyof Parts>([
  ['(garbage collector)', 'collector'],
  ['(idle)', 'idle'],
]);

/** What the search asks core for. */
const DOORS = [
  ['evaluate', '/core/evaluate.js'],
  ['evaluateGradient', '/core/gradient.js'],
] as const;

/** What a function begins; null for what its caller began. */
function begins({ functionName, url }: ProfileNode['callFrame']): keyof Parts | null {
  if (DOORS.some(([name, file]) => functionName === name && url.endsWith(file))) return 'evaluate';
  const inSearch = url.includes('/dist/optimizers/') || url.endsWith('/cli/run/ledger.js');
  return inSearch ? 'strategy' : (NAMED.get(functionName) ?? null);
}

/** Adds a V8 processor profile (`node --cpu-prof`) up. */
export function partsOf(text: string): Parts {
  const { nodes, samples, timeDeltas } = JSON.parse(text) as Profile;
  const byId = new Map(nodes.map((node) => [node.id, node]));
  const partById = new Map<number, keyof Parts>();
  const visit = (node: ProfileNode, above: keyof Parts): void => {
    const part = above === 'evaluate' ? above : (begins(node.callFrame) ?? above);
    partById.set(node.id, part);
    for (const child of node.children ?? []) visit(byId.get(child)!, part);
  };
  visit(nodes[0], 'command');
  const parts = { evaluate: 0, strategy: 0, collector: 0, command: 0, idle: 0 };
  samples.forEach((id, i) => {
    parts[partById.get(id) ?? 'command'] += timeDeltas[i] / 1e6;
  });
  return parts;
}
