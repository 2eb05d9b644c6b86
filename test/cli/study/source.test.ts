import { describe, expect, it } from 'vitest';
import { MAX_STUDY_BYTES, readStudy } from '../../../cli/study/index.js';
import { MINIMAL, printed } from './support.js';

function timed(bytes: Uint8Array) {
  const start = performance.now();
  const result = readStudy(bytes, 'study.yaml');
  return { result, ms: performance.now() - start };
}
const bytesOf = (text: string) => new TextEncoder().encode(text);

describe('a file that is no study', () => {
  it('of 100 MB is refused before it is read', () => {
    const { result, ms } = timed(new Uint8Array(100e6));
    expect(result).toEqual({
      kind: 'faults',
      faults: [
        {
          file: 'study.yaml',
          line: 1,
          column: 1,
          path: '',
          found: 'a file of 100000000 bytes',
          wanted: `at most ${MAX_STUDY_BYTES} bytes: a study file is a short text`,
        },
      ],
    });
    expect(ms).toBeLessThan(100);
  });

  it('that is not UTF-8 is refused at the byte', () => {
    const bytes = bytesOf(MINIMAL);
    bytes[MINIMAL.indexOf('400')] = 0xff;
    expect(timed(bytes).result).toMatchObject({
      faults: [
        {
          line: 4,
          column: 13,
          found: `the byte 0xff at offset ${MINIMAL.indexOf('400')}`,
          wanted: 'text in UTF-8',
        },
      ],
    });
    const cut = bytesOf(`${MINIMAL}# \u00b5`).slice(0, -1);
    expect(timed(cut).result).toMatchObject({
      faults: [{ line: 9, column: 3, found: 'a file that ends inside a character' }],
    });
    const lone = bytesOf('title: \u00b5x\n');
    lone[8] = 0x41;
    expect(timed(lone).result).toMatchObject({ faults: [{ line: 1, column: 8 }] });
    expect(timed(new Uint8Array([0xff, 0xfe, 0x70, 0])).result).toMatchObject({
      faults: [{ line: 1, column: 1 }],
    });
  });

  it('with an alias bomb is refused in no time', () => {
    const levels = Array.from({ length: 9 }, (_, i) => {
      const inside = i === 0 ? 'x' : `*a${i - 1}`;
      return `k${i}: &a${i} [${Array(9).fill(inside).join(', ')}]`;
    });
    const { result, ms } = timed(bytesOf(`${MINIMAL}${levels.join('\n')}\n`));
    expect(ms).toBeLessThan(1000);
    expect(result).toMatchObject({
      faults: [
        {
          found: 'too many or too deep values (an alias counts as what it stands for)',
          wanted: 'at most 20000 values, 32 levels deep',
        },
      ],
    });
    expect(printed('a: &a [*a]\n')).toEqual([
      'study.yaml:1:7 a.0.0.0.0.0.0.0.0.0.0.0.0.0.0.0.0: got too many or too deep values (an alias counts as what it stands for); needs at most 20000 values, 32 levels deep',
    ]);
  });

  it.each([
    ['brackets', `a: ${'['.repeat(60000)}`, 1, 36],
    ['braces', 'a: {'.repeat(15000), 1, 132],
    ['list marks', `${'- '.repeat(30000)}x`, 1, 129],
    ['question marks', `${'? '.repeat(30000)}x`, 1, 129],
    ['indentation', `a:\n${' '.repeat(200)}b: 1`, 2, 129],
  ])('nested without end by %s is refused at the place', (_, text, line, column) => {
    const { result, ms } = timed(bytesOf(text));
    expect(ms).toBeLessThan(1000);
    expect(result).toMatchObject({ faults: [{ line, column, found: 'nesting too deep to be a study' }] });
  });

  it.each([
    [
      'tabs',
      'pulsewright: 1\nemitter:\n\tmodel: two-level\n',
      /^study.yaml:3:1: got bad YAML .*needs spaces as indentation$/,
    ],
    ['an open quote', 'pulsewright: 1\ntitle: "x\n', /^study.yaml:3:1: got bad YAML \(Missing closing/],
    ['an open bracket', 'a: [1, 2\n', /^study.yaml:2:1: got bad YAML/],
    ['bad indentation', 'pulsewright: 1\n title: x\n', /^study.yaml:1:14: got bad YAML/],
    ['two documents', '---\na: 1\n---\nb: 1\n', /^study.yaml:3:1: got bad YAML/],
    ['an unknown tag', 'title: !python/object x\n', /^study.yaml:1:8: got bad YAML/],
  ])('with %s is refused as bad YAML at the place', (_, text, message) => {
    expect(printed(text)[0]).toMatch(message);
  });

  it.each([
    ['nothing', '', 'got nothing'],
    ['a comment', '# only\n', 'got nothing'],
    ['a word', 'hello', 'got hello'],
    ['a list', '- 1\n', 'got a list of 1'],
  ])('that holds %s says what a study has', (_, text, found) => {
    const [first] = printed(text);
    expect(first).toMatch(/^study\.yaml:1:1/);
    expect(first).toContain(`${found}; needs a mapping with pulsewright, title, emitter, pulse`);
  });
});
