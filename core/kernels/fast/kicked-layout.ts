import { addEmittedCounting, addThinnedCounting } from '../../counting/emitted.js';
import { addFilteredMoments } from '../../counting/filtered.js';
import { type Hierarchy, HierarchyBuilder } from '../../counting/hierarchy.js';
import { tailEffects } from '../../counting/tail.js';
import type { Scheme } from '../../emitter/contract.js';
import { buildGenerator, type Generator } from '../../emitter/generator.js';
import { coherencePairs, type SparseMatrix } from '../../emitter/operators.js';
import type { CountRequest } from '../count.js';
import { Memo } from './memo.js';
import { ExponentialFamily, sparseRows } from './sparse.js';

/** A set of coordinates that the drive mixes, with the places in the state of every lane that uses them. */
export interface Component {
  readonly coordinates: readonly number[];
  readonly offsets: Int32Array;
}

/** A complex block that turns by itself: places of its parts X and Y, and its quanta j − k. */
export interface TurningPair {
  readonly x: number;
  readonly y: number;
  readonly quanta: number;
}

/**
 * The counting hierarchy sorted for splitting. One part is the emitter's own unitary motion, which is the same for every
 * lane, together with the turning of block jk by (j − k)·line, the frequency at which the collected dipole turns without
 * drive. The rest, K, is constant: decay, dephasing, jumps, the filter's damping and its offset from the line, and
 * all couplings; without drive the two parts commute. Coordinates that stay zero, or that no figure depends on, are
 * left out.
 */
export interface KickedLayout {
  readonly levels: number;
  readonly components: readonly Component[];
  readonly pairs: readonly TurningPair[];
  readonly kicks: ExponentialFamily;
  /** Figures as functionals of the state at the end of the drive. */
  readonly effects: readonly { readonly name: string; readonly row: Float64Array }[];
  /** lane·size + coordinate of every place in the state. */
  readonly places: Int32Array;
  /** Places that start at 1. */
  readonly seeds: readonly number[];
}

/** Energies of the levels in the drive's frame, 1/ps. */
export function frameEnergies(request: CountRequest): number[] {
  return request.scheme.levels.map((l) => l.offset - l.excitons * (request.frame - request.shift));
}

/** What the layout depends on: all of it enters the memo's key. */
interface Ingredients {
  readonly scheme: CountRequest['scheme'];
  readonly dipoles: CountRequest['dipoles'];
  readonly thinning: number | null;
  readonly filter: { readonly kappa: number; readonly order: number } | null;
  /** Filter centre minus the collected line, 1/ps. */
  readonly offset: number;
  /** Frame in which the collected line stands still (the exciton line where nothing is filtered), 1/ps. */
  readonly frame: number;
  readonly used: readonly (readonly [boolean, boolean])[];
  /** Whether the drive's frame turns coherences: pairs of levels with different energies there. */
  readonly distinct: readonly boolean[];
  /** Whether the collected line turns in the drive's frame. */
  readonly turning: boolean;
}

/** Frequencies are rounded to this (1/ps), so that one emitter gives the same ingredients in every frame. */
const GRAIN = 2 ** -42;
const rounded = (x: number): number => Math.round(x / GRAIN) * GRAIN;

function hierarchyOf({ filter, thinning, dipoles }: Ingredients, center: number): Hierarchy {
  const builder = new HierarchyBuilder();
  if (filter) {
    addFilteredMoments(builder, dipoles, { kappa: filter.kappa, center }, filter.order);
  } else {
    addEmittedCounting(builder, dipoles);
    if (thinning !== null) addThinnedCounting(builder, dipoles, thinning);
  }
  return builder.build();
}

/** Mean transition frequency of the collected dipoles in the drive's frame, weighted by rate. */
export function lineFrequency(request: CountRequest, energies: readonly number[]): number {
  const n = energies.length;
  let sum = 0;
  let weight = 0;
  for (const { re, im } of request.dipoles) {
    for (let k = 0; k < n * n; k++) {
      const rate = re[k] * re[k] + im[k] * im[k];
      sum += rate * (energies[k % n] - energies[Math.floor(k / n)]);
      weight += rate;
    }
  }
  return weight > 0 ? sum / weight : 0;
}

/** The scheme without level energies. */
function withoutEnergies(scheme: Scheme): Scheme {
  return { ...scheme, levels: scheme.levels.map((l) => ({ ...l, offset: 0, excitons: l.excitons })) };
}

interface Entry {
  readonly row: number;
  readonly col: number;
  readonly value: number;
}

/** Entries of K on lane·size + coordinate. */
function kickEntries(scheme: Scheme, hierarchy: Hierarchy, offset: readonly number[], size: number): Entry[] {
  const dissipators = buildGenerator(withoutEnergies(scheme), 0, 0).constant;
  const out: Entry[] = [];
  const put = (m: SparseMatrix | null, factor: number, from: number, to: number): void => {
    if (!m)
      for (let i = 0; i < size; i++) out.push({ row: to * size + i, col: from * size + i, value: factor });
    else {
      m.value.forEach((v, k) => {
        out.push({ row: to * size + m.row[k], col: from * size + m.col[k], value: factor * v });
      });
    }
  };
  hierarchy.blocks.forEach((b, i) => {
    for (const lane of b.hermitian ? [b.lane] : [b.lane, b.lane + 1]) {
      put(dissipators, 1, lane, lane);
      if (b.damping !== 0) put(null, -b.damping, lane, lane);
    }
    if (b.hermitian || offset[i] === 0) return;
    put(null, offset[i], b.lane + 1, b.lane);
    put(null, -offset[i], b.lane, b.lane + 1);
  });
  for (const c of hierarchy.couplings) {
    put(c.matrix < 0 ? null : hierarchy.matrices[c.matrix], c.factor, c.from, c.to);
  }
  return out.filter((e) => e.value !== 0);
}

/** Connected sets of coordinates under the drive parts in use and the level energies. */
function connected(
  generator: Generator,
  parts: readonly SparseMatrix[],
  distinct: readonly boolean[],
): number[] {
  const n = generator.levels;
  const size = n * n;
  const owner = Array.from({ length: size }, (_, i) => i);
  const find = (i: number): number => {
    let root = i;
    while (owner[root] !== root) root = owner[root];
    return root;
  };
  const join = (a: number, b: number): void => {
    const [p, q] = [find(a), find(b)];
    owner[Math.max(p, q)] = Math.min(p, q);
  };
  for (const m of parts) for (let e = 0; e < m.row.length; e++) join(m.row[e], m.col[e]);
  distinct.forEach((different, pair) => {
    if (different) join(n + 2 * pair, n + 2 * pair + 1);
  });
  return owner.map((_, i) => find(i));
}

const memo = new Memo<KickedLayout>(8);

/**
 * @param used which of Re Ω_c, Im Ω_c of each drive component ever differ from zero
 * @param line frequency of the collected line in the drive's frame, 1/ps
 */
export function kickedLayout(
  request: CountRequest,
  used: readonly (readonly [boolean, boolean])[],
  line: number,
): KickedLayout {
  const { scheme, dipoles, thinning, filter, frame, shift } = request;
  const energies = frameEnergies(request);
  const ingredients: Ingredients = {
    scheme,
    dipoles,
    thinning,
    filter: filter && { kappa: filter.kappa, order: filter.order },
    offset: filter ? rounded(filter.center - line) : 0,
    frame: filter ? rounded(frame + line - shift) : 0,
    used,
    distinct: coherencePairs(energies.length).map(([i, j]) => energies[i] !== energies[j]),
    turning: line !== 0,
  };
  return memo.get(
    JSON.stringify(ingredients, (_, v) => (ArrayBuffer.isView(v) ? Array.from(v as Float64Array) : v)),
    () => build(ingredients),
  );
}

function build(ingredients: Ingredients): KickedLayout {
  const { scheme, filter, used, distinct } = ingredients;
  // Everything here is the same in any frame: the figures have no charge under a change of frame.
  const generator = buildGenerator(scheme, ingredients.frame, 0);
  const hierarchy = hierarchyOf(ingredients, ingredients.offset);
  const quanta = filter
    ? hierarchyOf(ingredients, 1).blocks.map((b) => b.rotation)
    : hierarchy.blocks.map(() => 0);
  const size = generator.levels ** 2;
  const entries = kickEntries(
    scheme,
    hierarchy,
    hierarchy.blocks.map((b) => b.rotation),
    size,
  );
  const parts = used.flatMap(([re, im], c) => [
    ...(re ? [generator.real[c]] : []),
    ...(im ? [generator.imaginary[c]] : []),
  ]);
  const owner = connected(generator, parts, distinct);
  const node = (index: number): number => Math.floor(index / size) * size + owner[index % size];
  const turning = hierarchy.blocks.flatMap((b, i) =>
    b.hermitian || quanta[i] === 0 || !ingredients.turning ? [] : [{ lane: b.lane, quanta: quanta[i] }],
  );
  const edges: [number, number][] = entries.map((e) => [node(e.col), node(e.row)]);
  for (const { lane } of turning) {
    for (let i = 0; i < size; i++) {
      const [x, y] = [node(lane * size + i), node((lane + 1) * size + i)];
      edges.push([x, y], [y, x]);
    }
  }
  const starts = hierarchy.seeded.map((b) => node(hierarchy.blocks[b].lane * size));
  const reached = reach(starts, edges);
  const ends = hierarchy.targets.flatMap((t) =>
    Array.from({ length: generator.levels }, (_, i) => node(hierarchy.blocks[t.block].lane * size + i)),
  );
  for (let i = 0; i < generator.levels; i++) ends.push(node(hierarchy.blocks[0].lane * size + i));
  const needed = reach(
    ends,
    edges.map(([a, b]) => [b, a]),
  );
  const active = new Set([...reached].filter((v) => needed.has(v)));
  return compact(generator, hierarchy, entries, owner, active, turning);
}

function reach(starts: readonly number[], edges: readonly (readonly [number, number])[]): Set<number> {
  const next = new Map<number, number[]>();
  for (const [a, b] of edges) {
    if (a === b) continue;
    const list = next.get(a);
    if (list) list.push(b);
    else next.set(a, [b]);
  }
  const seen = new Set(starts);
  const stack = [...starts];
  for (let v = stack.pop(); v !== undefined; v = stack.pop()) {
    for (const w of next.get(v) ?? []) {
      if (seen.has(w)) continue;
      seen.add(w);
      stack.push(w);
    }
  }
  return seen;
}

function compact(
  generator: Generator,
  hierarchy: Hierarchy,
  entries: readonly Entry[],
  owner: readonly number[],
  active: ReadonlySet<number>,
  turning: readonly { lane: number; quanta: number }[],
): KickedLayout {
  const size = generator.levels ** 2;
  const roots = [...new Set(owner)];
  const members = roots.map((root) => owner.flatMap((o, i) => (o === root ? [i] : [])));
  const place = new Int32Array(hierarchy.lanes * size).fill(-1);
  const places: number[] = [];
  const offsets: number[][] = roots.map(() => []);
  for (let lane = 0; lane < hierarchy.lanes; lane++) {
    roots.forEach((root, c) => {
      if (!active.has(lane * size + root)) return;
      offsets[c].push(places.length);
      for (const i of members[c]) {
        place[lane * size + i] = places.length;
        places.push(lane * size + i);
      }
    });
  }
  const kept = entries.filter((e) => place[e.row] >= 0 && place[e.col] >= 0);
  const pairs = turning.flatMap(({ lane, quanta }) =>
    Array.from({ length: size }, (_, i) => ({
      x: place[lane * size + i],
      y: place[(lane + 1) * size + i],
      quanta,
    })).filter((p) => p.x >= 0),
  );
  const effects = tailEffects(generator, hierarchy);
  return {
    levels: generator.levels,
    components: roots
      .map((_, c) => ({ coordinates: members[c], offsets: Int32Array.from(offsets[c]) }))
      .filter((c) => c.offsets.length > 0),
    pairs,
    kicks: new ExponentialFamily(
      sparseRows(
        places.length,
        kept.map((e) => place[e.row]),
        kept.map((e) => place[e.col]),
        kept.map((e) => e.value),
      ),
    ),
    // Functionals lie on [coordinate·lanes + lane].
    effects: effects.names.map((name, i) => ({
      name,
      row: Float64Array.from(
        places,
        (p) => effects.rows[i][(p % size) * hierarchy.lanes + Math.floor(p / size)],
      ),
    })),
    places: Int32Array.from(places),
    seeds: hierarchy.seeded.map((b) => place[hierarchy.blocks[b].lane * size]),
  };
}
