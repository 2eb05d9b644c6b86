import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { parse, stringify } from 'yaml';
import {
  biasOf,
  keyEntries,
  leafAt,
  plateauDetunings,
  readStudy,
  type Study,
  writeStudyFile,
} from '../../cli/study/index.js';
import { type Stream, stream } from '../../core/index.js';
import { applyParameters } from '../../optimizers/index.js';
import { COMPLETE, MINIMAL } from '../cli/study/support.js';

/** The long form runs 1000 and more; a failure names the case, which `PULSEWRIGHT_MUTATION_CASE` repeats alone. */
const CASES = Number(process.env['PULSEWRIGHT_MUTATIONS'] ?? 300);
const ONLY = process.env['PULSEWRIGHT_MUTATION_CASE'];
const SEED = 41;

const starters = new URL('../../cli/study/starters/', import.meta.url);
const originals = [
  MINIMAL,
  COMPLETE,
  ...readdirSync(starters)
    .filter((name) => name.endsWith('.yaml'))
    .map((name) => readFileSync(new URL(name, starters), 'utf8')),
];

const pick = <T>(random: Stream, list: readonly T[]): T => list[random.int(list.length)];
const names = [...new Set(keyEntries.map(({ pattern }) => pattern.slice(pattern.lastIndexOf('.') + 1)))];
const UNITS = [
  'fs',
  'ps',
  'ns',
  'us',
  'µs',
  'GHz',
  'THz',
  'ueV',
  'meV',
  'eV',
  'nm',
  'ps^2',
  'ps^3',
  '1/ps',
  '1/ns',
  'K',
  'fJ',
  'V',
  'ueV/mV',
  '%',
  'deg',
  'rad',
  'pi',
  '',
  'PS',
  'parsec',
];
const VALUES = [
  '-3 ps',
  '0',
  '-1',
  '1e999 ps',
  '1e308 meV',
  '.inf',
  '.nan',
  'null',
  '',
  '~',
  '[]',
  '{}',
  '[1 ps, 2]',
  'true',
  '"',
  "'",
  '0x10',
  '1e-320 ps',
  '{ from: 1 ps, to: 2 ps }',
  '{ from: 3 pi, to: 1 pi, scale: log }',
  '{ of: [] }',
  '{ of: [1 ps, 2 meV] }',
  '{ same_as: tones.0.fwhm }',
  '{ same_as: tones.9.area }',
  '[100 mV, 260 mV]',
  '[2 V, 1 V]',
  '[1 mV]',
  '*a',
  '&a 5 ps',
  '!!binary AA==',
  '|',
  '2024-01-01',
  '9'.repeat(400),
  '\u0000',
  '<<',
  '- - -',
  '5 ps # 6',
];

type Mutation = (text: string, random: Stream) => string | Uint8Array;

const lineMutation =
  (change: (lines: string[], at: number, random: Stream) => void): Mutation =>
  (text, random) => {
    const lines = text.split('\n');
    change(lines, random.int(lines.length), random);
    return lines.join('\n');
  };

/** Replaces one match of a pattern, chosen at random. */
const matchMutation =
  (pattern: RegExp, replace: (found: string, random: Stream) => string): Mutation =>
  (text, random) => {
    const matches = [...text.matchAll(pattern)];
    if (matches.length === 0) return text;
    const match = pick(random, matches);
    return text.slice(0, match.index) + replace(match[0], random) + text.slice(match.index + match[0].length);
  };

function typo(word: string, random: Stream): string {
  const at = random.int(word.length);
  const letter = String.fromCharCode(97 + random.int(26));
  const swapped = word.slice(0, at) + (word[at + 1] ?? '') + word[at] + word.slice(at + 2);
  return pick(random, [
    swapped,
    word.slice(0, at) + word.slice(at + 1),
    word.slice(0, at) + letter + word.slice(at),
  ]);
}

type Tree = Record<string, unknown>;

/** Changes the tree behind the text: takes out, moves, repeats or replaces a node, then writes YAML or JSON. */
const treeMutation: Mutation = (text, random) => {
  const tree = parse(text) as Tree;
  const spots: [Tree, string][] = [];
  const walk = (node: unknown): void => {
    if (node === null || typeof node !== 'object') return;
    for (const key of Object.keys(node)) {
      spots.push([node as Tree, key]);
      walk((node as Tree)[key]);
    }
  };
  walk(tree);
  const [parent, key] = pick(random, spots);
  const [otherParent, otherKey] = pick(random, spots);
  const copy = structuredClone(otherParent[otherKey]);
  const changes: (() => void)[] = [
    () => delete parent[key],
    () => {
      parent[key] = copy;
    },
    () => {
      parent[pick(random, names)] = copy;
    },
    () => {
      parent[key] = [parent[key]];
    },
    () => {
      parent[key] = { [key]: parent[key] };
    },
    () => {
      parent[key] = pick(random, [null, 0, -1, 1e300, true, '', [], {}, 'x'.repeat(5000)]);
    },
  ];
  pick(random, changes)();
  return random.int(2) === 0 ? stringify(tree) : JSON.stringify(tree, null, pick(random, [0, 2]));
};

const byteMutation: Mutation = (text, random) => {
  const bytes = [...new TextEncoder().encode(text)];
  for (let n = 1 + random.int(4); n > 0; n--) {
    const at = random.int(bytes.length);
    const edit = random.int(4);
    if (edit === 0) bytes[at] ^= 1 << random.int(8);
    else if (edit === 1) bytes.splice(at, 1 + random.int(20));
    else if (edit === 2) bytes.splice(at, 0, random.int(256));
    else bytes.length = at + 1;
  }
  return new Uint8Array(bytes);
};

const mutations: Readonly<Record<string, Mutation>> = {
  'misspelt key': matchMutation(/\w+(?=:)/g, typo),
  'other key': matchMutation(/\w+(?=:)/g, (_, random) => pick(random, names)),
  'other unit': matchMutation(
    /(?<=\d ?)(fs|ueV\/mV|mV|ps\^2|ps|ns|GHz|MHz|ueV|meV|nm|1\/ns|1\/ps|K|fJ|%|deg|pi)\b/g,
    (_, random) => pick(random, UNITS),
  ),
  'other number': matchMutation(/[-+]?\d+(\.\d+)?(e-?\d+)?/g, (found, random) =>
    pick(random, [
      `-${found}`,
      '0',
      '1e400',
      `${found}e${random.int(40)}`,
      '',
      'NaN',
      `${random.normal() * 100}`,
      `.${found}`,
    ]),
  ),
  'other value': matchMutation(/(?<=: )[^\n{}[\],#]+/g, (_, random) => pick(random, VALUES)),
  'other word': matchMutation(/[a-z][a-z-]+/g, (found, random) =>
    pick(random, [typo(found, random), 'h', 'cascade', 'two-photon', 'crossed', 'log']),
  ),
  'line out': lineMutation((lines, at) => void lines.splice(at, 1)),
  'line twice': lineMutation((lines, at) => void lines.splice(at, 0, lines[at])),
  'lines exchanged': lineMutation((lines, at, random) => {
    const other = random.int(lines.length);
    [lines[at], lines[other]] = [lines[other], lines[at]];
  }),
  'line moved in or out': lineMutation((lines, at, random) => {
    lines[at] =
      random.int(2) === 0 ? `  ${lines[at]}` : lines[at].replace(/^ {1,2}/, pick(random, ['', '\t']));
  }),
  'bracket or quote': matchMutation(/[{}[\],:"'-]/g, (_, random) =>
    pick(random, ['', '{', '}', '[', ']', ',', ':', '"', "'", '&x', '*x', '|', '>', '?', '%', '@']),
  ),
  tree: treeMutation,
  bytes: byteMutation,
};

const kinds = Object.keys(mutations);

/** Every number of a value is finite. */
function expectFinite(value: unknown, path: string): void {
  if (typeof value === 'number') expect(Number.isFinite(value), path).toBe(true);
  else if (value !== null && typeof value === 'object') {
    for (const [key, inner] of Object.entries(value)) expectFinite(inner, `${path}.${key}`);
  }
}

function expectSound(study: Study): void {
  expectFinite(study, 'study');
  const { design, parameters, ties, goal, tuning } = study;
  expect(design.pulse.tones.length).toBeGreaterThan(0);
  for (const tone of design.pulse.tones) {
    expect(tone.fwhm).toBeGreaterThan(0);
    expect(tone.area).toBeGreaterThanOrEqual(0);
  }
  expect(design.emitter.lifetime).toBeGreaterThan(0);
  expect(design.collection.efficiency).toBeGreaterThan(0);
  expect(design.collection.efficiency).toBeLessThanOrEqual(1);
  if (design.laser !== null && design.laser.rejection > 0) expect(design.laser.piPulse).not.toBeNull();
  if (goal.front.from !== null && goal.front.to !== null) expect(goal.front.from).toBeLessThan(goal.front.to);
  const bias = biasOf(study, design);
  expect(bias === null).toBe(tuning === null);
  if (tuning !== null) {
    expect(tuning.slope).not.toBe(0);
    expect(tuning.range.from).toBeLessThan(tuning.range.to);
    const allowed = plateauDetunings(tuning);
    const { detuning } = design.pulse.tones[0];
    expect(detuning >= allowed.from && detuning <= allowed.to).toBe(true);
  }
  for (const parameter of parameters) {
    expect(leafAt(parameter.path)).not.toBeNull();
    if (parameter.kind === 'range') expect(parameter.from).toBeLessThan(parameter.to);
    else expect(parameter.values.length).toBeGreaterThan(0);
  }
  const starts = parameters.map((p) => (p.kind === 'range' ? p.from : p.values[0]));
  // Throws for a tie that is circular or leads nowhere; the design already holds every start.
  expect(applyParameters(study, starts)).toEqual(design);
  for (const tie of ties) expect(tie.path).not.toBe(tie.sameAs);
  const again = readStudy(new TextEncoder().encode(writeStudyFile(study, design, study.title)), 'again.yaml');
  expect(again).toMatchObject({ kind: 'study', study: { design } });
}

/** One mutated file: up to three mutations of one original. */
function mutated(index: number): { bytes: Uint8Array; kind: string } {
  const random = stream(SEED, index);
  let text: string | Uint8Array = pick(random, originals);
  const applied: string[] = [];
  for (let n = 1 + random.int(3); n > 0 && typeof text === 'string'; n--) {
    // A tree can be changed only while the text is still readable; so it comes first or not at all.
    const usable = applied.length === 0 ? kinds : kinds.filter((kind) => kind !== 'tree');
    const kind = pick(random, usable);
    applied.push(kind);
    text = mutations[kind](text, random);
  }
  return {
    bytes: typeof text === 'string' ? new TextEncoder().encode(text) : text,
    kind: applied.join(', '),
  };
}

describe('mutated study files', () => {
  it(`${CASES} of them end in placed faults or in a sound study, each within a second`, () => {
    const ends = { faults: 0, study: 0 };
    const indices = ONLY === undefined ? Array.from({ length: CASES }, (_, i) => i) : [Number(ONLY)];
    for (const index of indices) {
      const { bytes, kind } = mutated(index);
      const start = performance.now();
      try {
        const result = readStudy(bytes, 'study.yaml');
        const ms = performance.now() - start;
        expect(ms).toBeLessThan(1000);
        ends[result.kind]++;
        if (result.kind === 'study') expectSound(result.study);
        else {
          expect(result.faults.length).toBeGreaterThan(0);
          for (const fault of result.faults) {
            expect(fault.line).toBeGreaterThanOrEqual(1);
            expect(fault.column).toBeGreaterThanOrEqual(1);
            expect(fault.found).toMatch(/\S/);
            expect(fault.wanted).toMatch(/\S/);
          }
        }
      } catch (error) {
        const text = new TextDecoder().decode(bytes);
        throw new Error(`PULSEWRIGHT_MUTATION_CASE=${index} (${kind})\n${text}`, { cause: error });
      }
    }
    if (ONLY !== undefined) return;
    // Both ends must come about, or the mutations test nothing.
    expect(ends.faults).toBeGreaterThan(CASES / 4);
    expect(ends.study).toBeGreaterThan(CASES / 50);
  }, 600_000);
});
