import { existsSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { FREE, freshFolder, invoke } from './invoke.js';

const bomb = `${['a: &a [x, x, x, x, x, x, x, x]', ...'bcdefghij'.split('').map((c, i) => `${c}: &${c} [${Array(8).fill(`*${'abcdefghij'[i]}`).join(', ')}]`)].join('\n')}\n`;

const CASES: readonly (readonly [string, string | Buffer, RegExp])[] = [
  ['unknown unit', FREE.replace('300 ps', '300 pss'), /:3:\d+ emitter\.lifetime: got 300 pss/],
  ['wrong dimension', FREE.replace('300 ps', '300 GHz'), /:3:\d+ emitter\.lifetime: got 300 GHz/],
  ['missing unit', FREE.replace('300 ps', '300'), /:3:\d+ emitter\.lifetime: got 300/],
  [
    'negative width',
    FREE.replace('from: 3 ps', 'from: -3 ps'),
    /:6:\d+ pulse\.tones\.0\.fwhm\.from: got -3 ps/,
  ],
  [
    'empty range',
    FREE.replace('to: 1.4 pi', 'to: 0.3 pi'),
    /:7:\d+ pulse\.tones\.0\.area: got an empty range/,
  ],
  [
    'reversed range',
    FREE.replace('to: 1.4 pi', 'to: 0.1 pi'),
    /:7:\d+ pulse\.tones\.0\.area: got a reversed range/,
  ],
  [
    'tie to nowhere',
    FREE.replace('{ from: 0.3 pi, to: 1.4 pi }', '{ same_as: tones.7.area }'),
    /:7:\d+ pulse\.tones\.0\.area/,
  ],
  [
    'circular tie',
    FREE.replace('{ from: 0.3 pi, to: 1.4 pi }', '{ same_as: tones.0.area }'),
    /:7:\d+ pulse\.tones\.0\.area/,
  ],
  [
    'list with one wrong unit',
    FREE.replace('{ from: 0.3 pi, to: 1.4 pi }', '{ of: [1 pi, 2 ps] }'),
    /:7:\d+ pulse\.tones\.0\.area.*2 ps/,
  ],
  ['duplicate key', FREE.replace('title:', 'pulsewright: 1\ntitle:'), /:2:\d+/],
  ['misspelt key', FREE.replace('lifetime', 'lifetme'), /:3:\d+ emitter\.lifetme.*lifetime/],
  ['bad YAML', FREE.replace('{ model', '{{ model'), /:4:1: got bad YAML/],
  ['alias bomb', FREE + bomb, /study\.yaml:\d+:\d+/],
  ['not UTF-8', Buffer.concat([Buffer.from(FREE), Buffer.from([0xff])]), /:10:1: got the byte 0xff.*UTF-8/],
  ['100 MB', Buffer.alloc(100_000_000, 32), /got a file of 100000000 bytes/],
  ['empty file', '', /study\.yaml:1:1/],
  ['goal above the efficiency', `${FREE}collection: { efficiency: 0.5 }\n`, /:8:\d+ goal\.at_least/],
];

describe('bad input', () => {
  it.each(CASES)('%s: exit 2, placed, no trace, nothing written', async (_, text, message) => {
    const folder = freshFolder();
    const path = join(folder, 'study.yaml');
    writeFileSync(path, text);
    for (const argv of [
      ['check', path],
      ['optimize', path, '--out', join(folder, 'run')],
    ]) {
      const { code, out, err } = await invoke(argv);
      expect(code).toBe(2);
      expect(out).toBe('');
      expect(err).toMatch(message);
      expect(err).not.toMatch(/internal error|\n\s+at /);
    }
    expect(existsSync(join(folder, 'run'))).toBe(false);
  });

  it('lists all faults at once', async () => {
    const path = join(freshFolder(), 'study.yaml');
    writeFileSync(
      path,
      FREE.replace('300 ps', '300').replace('1.4 pi', '1.4 ps').replace('seed: 5', 'sed: 5'),
    );
    const { err } = await invoke(['check', path]);
    expect(err).toMatch(/:3:.*\n.*:7:.*\n.*:9:/);
  });
});
