import type { Hierarchy } from '../../../counting/hierarchy.js';
import { tailEffects } from '../../../counting/tail.js';
import { buildGenerator, type Generator } from '../../../emitter/generator.js';
import type { SparseMatrix } from '../../../emitter/operators.js';
import type { CountRequest } from '../../count.js';
import { type SparseRows, sparseRows } from '../sparse.js';
import {
  constantEntries,
  type Entry,
  type Functional,
  hierarchyOf,
  spreadLane,
  withoutLane,
} from './constant-part.js';
import { type Component, mixedWith, reach } from './coordinates.js';
import { doubleCommutator, type Triples } from './correction.js';
import { Kick } from './kick.js';
import { ladderOf } from './ladder.js';
import { type Rotation, rotationsOf } from './rotation.js';
import { IngredientMemo, type Ingredients, rounded } from './signature.js';

/**
 * The counting hierarchy sorted for splitting. One part is the emitter's own unitary motion, which is the same for every
 * lane in the frame in which the collected line stands still. The rest, K, is constant: decay, dephasing, jumps, the
 * filter's damping and its offset from the line, and all couplings; without drive the two parts commute. Coordinates
 * that stay zero, or that no figure depends on, are left out.
 */
export interface Layout {
  readonly levels: number;
  readonly length: number;
  readonly components: readonly Component[];
  readonly rotations: readonly Rotation[];
  readonly kick: Kick;
  /** [[K, V], K] for V the effect of Re Ω and Im Ω of each used drive component, in pairs. */
  readonly corrections: readonly (readonly [Triples, Triples] | null)[];
  /** Figures as functionals of the state at the end of the drive, then the populations of the levels. */
  readonly effects: readonly Functional[];
  readonly populations: readonly Float64Array[];
  /** Places that start at 1. */
  readonly seeds: readonly number[];
  /** Work space of a state and its double. */
  readonly states: readonly [Float64Array, Float64Array];
}

/** Energies of the levels in the request's frame, 1/ps. */
export function frameEnergies(request: CountRequest): number[] {
  return request.scheme.levels.map((l) => l.offset - l.excitons * (request.frame - request.shift));
}

/** Mean transition frequency of the collected dipoles in the request's frame, weighted by rate; 0 without a filter. */
export function lineFrequency(request: CountRequest, energies: readonly number[]): number {
  if (!request.filter) return 0;
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

/**
 * By how much levels differ from the mean of those with as many excitons, where transitions of different frequency are
 * collected together: their dipole does not commute with that part of the free motion. Zero elsewhere.
 */
export function unevenEnergies(request: CountRequest, energies: readonly number[]): number[] {
  const { dipoles, scheme } = request;
  const n = energies.length;
  const frequencies = dipoles.map(({ re, im }) => {
    const own: number[] = [];
    for (let k = 0; k < n * n; k++) {
      if (re[k] !== 0 || im[k] !== 0) own.push(energies[k % n] - energies[Math.floor(k / n)]);
    }
    return own;
  });
  // Before a filter all modes count: they feed blocks that turn with one line.
  const together = request.filter ? [frequencies.flat()] : frequencies;
  const mixed = together.some((own) => own.some((e) => Math.abs(e - own[0]) > LEAST_SPLITTING));
  if (!mixed) return energies.map(() => 0);
  return scheme.levels.map(({ excitons }, i) => {
    const alike = energies.filter((_, j) => scheme.levels[j].excitons === excitons);
    return energies[i] - alike.reduce((a, b) => a + b, 0) / alike.length;
  });
}

/** Differences below this (1/ps) are rounding. */
const LEAST_SPLITTING = 1e-11;

const memo = new IngredientMemo<Layout>(12);

/**
 * @param used drive components that ever differ from zero
 * @param line frequency of the collected line in the request's frame, 1/ps
 * @param uneven parts of the level energies that count as constant, 1/ps
 */
export function layoutOf(
  request: CountRequest,
  used: readonly boolean[],
  line: number,
  uneven: readonly number[],
): Layout {
  const { scheme, dipoles, thinning, filter, frame, shift } = request;
  const ingredients: Ingredients = {
    scheme,
    dipoles,
    thinning,
    filter: filter && { kappa: filter.kappa, order: filter.order },
    offset: filter ? rounded(filter.center - line) : 0,
    frame: filter ? rounded(frame + line - shift) : 0,
    uneven: uneven.map(rounded),
    used,
    wanted: request.wanted ?? null,
  };
  return memo.get(ingredients, () => build(ingredients));
}

/** Lanes of the emitted hierarchy (emitted.ts) that sum to lane 0: no, one and more counted photons. The last needs the others. */
const WHOLE = [1, 2, 5];

function build(ingredients: Ingredients): Layout {
  const { scheme, used, wanted } = ingredients;
  // Everything here is the same in any frame: the figures have no charge under a change of frame.
  const generator = buildGenerator(scheme, ingredients.frame, 0);
  const hierarchy = hierarchyOf(ingredients, ingredients.offset);
  const size = generator.levels ** 2;
  const figures = figuresOf(generator, hierarchy, wanted);
  let entries = constantEntries(scheme, hierarchy, ingredients.uneven);
  let seeded = hierarchy.seeded.map((b) => hierarchy.blocks[b].lane);
  let populations = scheme.levels.map((_, i) => unit(i, size * hierarchy.lanes));
  let effects = figures;
  // With the count the whole state is known from its parts.
  if (!ingredients.filter && figures.some(({ name }) => name === 'multiphoton')) {
    const parts = WHOLE;
    entries = withoutLane(entries, parts, size);
    seeded = seeded.filter((lane) => lane > 0);
    populations = populations.map((row) => spreadLane(row, parts, size));
    effects = effects.map(({ name, row }) => ({ name, row: spreadLane(row, parts, size) }));
  }
  const owner = mixedWith(generator, used);
  const node = (index: number): number => Math.floor(index / size) * size + owner[index % size];
  const edges = entries.map((e): [number, number] => [node(e.col), node(e.row)]);
  const reached = reach(
    seeded.map((lane) => node(lane * size)),
    edges,
  );
  const ends = hierarchy.targets
    .filter(({ name }) => figures.some((f) => f.name === name))
    .flatMap(({ block }) => scheme.levels.map((_, i) => hierarchy.blocks[block].lane * size + i));
  for (const row of populations) {
    row.forEach((v, i) => {
      if (v !== 0) ends.push(i);
    });
  }
  const needed = reach(
    ends.map(node),
    edges.map(([a, b]) => [b, a]),
  );
  const active = new Set([...reached].filter((v) => needed.has(v)));
  const three = ladderOf(scheme, used)?.levels ?? null;
  return compact(
    { generator, entries, owner, active, effects, populations, seeded, used, three },
    hierarchy.lanes,
  );
}

/** The figures asked for, on [lane·size + coordinate]. */
function figuresOf(
  generator: Generator,
  hierarchy: Hierarchy,
  wanted: readonly string[] | null,
): Functional[] {
  const { names, rows } = tailEffects(generator, hierarchy);
  const { lanes } = hierarchy;
  const size = generator.levels ** 2;
  return names.flatMap((name, i) => {
    if (wanted && !wanted.includes(name)) return [];
    // Tail functionals lie on [coordinate·lanes + lane].
    const row = new Float64Array(size * lanes).map(
      (_, p) => rows[i][(p % size) * lanes + Math.floor(p / size)],
    );
    return [{ name, row }];
  });
}

function unit(at: number, length: number): Float64Array {
  const out = new Float64Array(length);
  out[at] = 1;
  return out;
}

interface Parts {
  readonly generator: Generator;
  readonly entries: readonly Entry[];
  readonly owner: readonly number[];
  readonly active: ReadonlySet<number>;
  readonly effects: readonly Functional[];
  readonly populations: readonly Float64Array[];
  readonly seeded: readonly number[];
  readonly used: readonly boolean[];
  /** Levels of the ladder that is driven, if one is. */
  readonly three: readonly number[] | null;
}

/** Gives every active coordinate of every lane its place; coordinates of one component lie together. */
function compact(parts: Parts, lanes: number): Layout {
  const { generator, entries, owner, active } = parts;
  const size = generator.levels ** 2;
  const roots = [...new Set(owner)];
  const members = roots.map((root) => owner.flatMap((o, i) => (o === root ? [i] : [])));
  const place = new Int32Array(lanes * size).fill(-1);
  const places: number[] = [];
  const offsets: number[][] = roots.map(() => []);
  for (let lane = 0; lane < lanes; lane++) {
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
  const constant = sparseRows(
    places.length,
    kept.map((e) => place[e.row]),
    kept.map((e) => place[e.col]),
    kept.map((e) => e.value),
  );
  const restricted = (row: Float64Array) => Float64Array.from(places, (p) => row[p]);
  const components = roots
    .map((_, c) => ({ coordinates: members[c], offsets: Int32Array.from(offsets[c]) }))
    .filter((c) => c.offsets.length > 0);
  return {
    levels: generator.levels,
    length: places.length,
    components,
    rotations: rotationsOf(components, generator.levels, parts.three),
    states: [new Float64Array(places.length), new Float64Array(places.length)],
    kick: new Kick(constant),
    corrections: parts.used.map((acts, c) =>
      acts
        ? [
            doubleCommutator(constant, lifted(generator.real[c], places, place, size)),
            doubleCommutator(constant, lifted(generator.imaginary[c], places, place, size)),
          ]
        : null,
    ),
    effects: parts.effects.map(({ name, row }) => ({ name, row: restricted(row) })),
    populations: parts.populations.map(restricted),
    seeds: parts.seeded.map((lane) => place[lane * size]).filter((p) => p >= 0),
  };
}

/** A map on the coordinates of one lane, on every lane. */
function lifted(m: SparseMatrix, places: readonly number[], place: Int32Array, size: number): SparseRows {
  const row: number[] = [];
  const col: number[] = [];
  const value: number[] = [];
  places.forEach((p, at) => {
    m.col.forEach((c, k) => {
      if (c !== p % size) return;
      row.push(place[p - c + m.row[k]]);
      col.push(at);
      value.push(m.value[k]);
    });
  });
  return sparseRows(places.length, row, col, value);
}
