import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import {
  jsonSchema,
  keyEntries,
  keyTable,
  leafAt,
  readStudy,
  writeDesign,
  writeStudyFile,
} from '../../../cli/study/index.js';
import { applyParameters } from '../../../optimizers/index.js';
import { COMPLETE, faultsOf, MINIMAL, studyOf } from './support.js';

describe('a written design', () => {
  const { study } = studyOf(COMPLETE);
  const values = [3.3 + 1e-15, Math.PI * 1.234567, 10, 12.000000000000002, -1 / 3];

  it('reads back bit for bit, with the goal, the search and the drift of its study', () => {
    const text = writeDesign(study, values, 'A point: "7" # of 9');
    const back = studyOf(text);
    expect(back.study).toEqual({
      ...study,
      title: 'A point: "7" # of 9',
      design: applyParameters(study, values),
      parameters: [],
      ties: [],
    });
    expect(back.study.design.pulse.tones[1].fwhm).toBe(values[0]);
    expect(back.remarks).toEqual([]);
    expect(writeDesign(back.study, [], back.study.title)).toBe(text);
  });

  it('has a unit on every quantity and no free value', () => {
    const text = writeDesign(study, values, '');
    for (const line of text.split('\n')) {
      const [, key, value] = /^\s*(?:- )?(\w+): (.+)$/.exec(line) ?? [];
      if (value === undefined || !/^[-+.\d]/.test(value)) continue;
      // A bound has the unit of its figure, and some figures have none.
      if (/^at_(least|most)$/.test(key)) continue;
      const pure =
        /^(pulsewright|slices|efficiency|rejection|quantile|from|to|points|evaluations|seed)$/.test(key);
      expect(/^\S+ \S+/.test(value), line).toBe(!pure);
    }
    expect(text).not.toMatch(/[{[]/);
  });

  it('leaves out what the emitter or the study does not have', () => {
    const text = writeStudyFile(studyOf(MINIMAL).study, studyOf(MINIMAL).study.design, 'x');
    expect(text).not.toMatch(/binding|splitting|biexciton|phonons|filter|laser|drift|at_least/);
    expect(studyOf(text).study.design).toEqual(studyOf(MINIMAL).study.design);
  });

  it('refuses numbers that are none and values that are too few', () => {
    const { design } = study;
    const broken = { ...design, emitter: { ...design.emitter, lifetime: Number.NaN } };
    expect(() => writeStudyFile(study, broken, '')).toThrow(RangeError);
    expect(() => writeDesign(study, [1], '')).toThrow('5 free parameters');
  });
});

/** The parts of JSON Schema (draft-07) that ours uses. */
type Schema = Record<string, unknown>;

function obeys(value: unknown, schema: Schema): boolean {
  const { anyOf, type, pattern, properties, required, items } = schema as {
    anyOf?: Schema[];
    type?: string;
    pattern?: string;
    properties?: Record<string, Schema>;
    required?: string[];
    items?: Schema;
  };
  if (anyOf && !anyOf.some((s) => obeys(value, s))) return false;
  if ('const' in schema && value !== schema['const']) return false;
  if (schema['enum'] && !(schema['enum'] as unknown[]).includes(value)) return false;
  if (type === 'integer' || type === 'number') {
    if (typeof value !== 'number' || (type === 'integer' && !Number.isInteger(value))) return false;
    if (value < ((schema['minimum'] as number) ?? value) || value > ((schema['maximum'] as number) ?? value))
      return false;
  }
  if (type === 'string') return typeof value === 'string' && (!pattern || new RegExp(pattern).test(value));
  if (type === 'array')
    return Array.isArray(value) && value.length > 0 && value.every((v) => obeys(v, items as Schema));
  if (type !== 'object') return true;
  if (typeof value !== 'object' || value === null || Array.isArray(value)) return false;
  const known = properties as Record<string, Schema>;
  if ((required as string[]).some((key) => !Object.hasOwn(value, key))) return false;
  return Object.entries(value).every(([key, inner]) => Object.hasOwn(known, key) && obeys(inner, known[key]));
}

describe('the JSON Schema', () => {
  const schema = jsonSchema();
  const { parse } = { parse: async (text: string) => (await import('yaml')).parse(text) as unknown };

  it('accepts what the reader accepts', async () => {
    expect(schema['$schema']).toBe('http://json-schema.org/draft-07/schema#');
    expect(obeys(await parse(MINIMAL), schema)).toBe(true);
    expect(obeys(await parse(COMPLETE), schema)).toBe(true);
    const { study } = studyOf(COMPLETE);
    expect(obeys(await parse(writeStudyFile(study, study.design, 'x')), schema)).toBe(true);
  });

  it.each([
    ['a wrong unit', MINIMAL.replace('5 ps', '5 kg')],
    ['a missing unit', MINIMAL.replace('5 ps', '5')],
    ['an unknown key', MINIMAL.replace('fwhm', 'fwmh')],
    ['a missing key', MINIMAL.replace('  lifetime: 400 ps\n', '')],
    ['an unknown name', `${MINIMAL}      shape: round\n`],
    ['a range with one end', MINIMAL.replace('5 ps', '{ from: 2 ps }')],
    ['a free value where none may be', MINIMAL.replace('400 ps', '{ of: [400 ps] }')],
    ['another version', MINIMAL.replace(': 1', ': 2')],
    ['broken evaluations', `${MINIMAL}search: { evaluations: 1.5 }\n`],
  ])('refuses %s, as the reader does', async (_, text) => {
    expect(obeys(await parse(text), schema)).toBe(false);
    expect(faultsOf(text).length).toBeGreaterThan(0);
  });

  it('has a description at every key', () => {
    const check = (node: Schema, path: string): void => {
      expect(node['description'], path).toEqual(expect.stringMatching(/\S/));
      const inner = (node['properties'] ??
        (node['items'] as Schema | undefined)?.['properties'] ??
        {}) as Schema;
      for (const [key, value] of Object.entries(inner)) check(value as Schema, `${path}.${key}`);
    };
    check(schema, '');
  });
});

describe('the table of keys', () => {
  it('has a row for every key, with default and allowed values', () => {
    const rows = keyTable().split('\n');
    expect(rows).toHaveLength(keyEntries.length + 2);
    expect(rows).toContain(
      '| `emitter.wavelength` | 930 nm | nm or um; more than 0 nm | vacuum wavelength of the exciton line; used for photon energies |',
    );
    for (const row of rows) expect(row.split(' | ')).toHaveLength(4);
  });

  it('finds the leaf of a path with and without its first key', () => {
    expect(leafAt('tones.3.fwhm')).toBe(leafAt('pulse.tones.0.fwhm'));
    expect(leafAt('collection.filter.center')?.rule).toMatchObject({ dimension: 'frequency', free: true });
    expect(leafAt('pulse')).toBeNull();
    expect(leafAt('pulse.tones.x.fwhm')).toBeNull();
  });
});

describe('starter studies', () => {
  const folder = new URL('../../../cli/study/starters/', import.meta.url);
  const names = readdirSync(folder).filter((name) => name.endsWith('.yaml'));

  it('are three or more', () => {
    expect(names).toEqual(expect.arrayContaining(['chirped.yaml', 'resonant.yaml', 'two-colour.yaml']));
  });

  it.each(names)(
    '%s is valid without a remark, has something to search, fits a screen, and warns of the laser',
    (name) => {
      const bytes = readFileSync(new URL(name, folder));
      const result = readStudy(bytes, name);
      if (result.kind === 'faults') throw new Error(JSON.stringify(result.faults, null, 1));
      expect(result.remarks).toEqual([]);
      expect(result.study.parameters.length).toBeGreaterThanOrEqual(2);
      const text = bytes.toString('utf8');
      expect(text.split('\n').length).toBeLessThanOrEqual(61);
      expect(text).toMatch(/Invented scenario/);
      expect(text).toMatch(/laser\s+(#\s+)?safety\s+(#\s+)?officer/);
    },
  );
});
