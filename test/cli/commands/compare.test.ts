import { existsSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { Resvg } from '@resvg/resvg-js';
import { describe, expect, it } from 'vitest';
import { FREE, freshFolder, invoke, studyFile } from './invoke.js';

interface Changes {
  readonly title?: string;
  readonly impurity?: string;
  readonly brightness?: string;
  readonly phonons?: string;
  readonly version?: string;
}

/** A finished run as its front.json has it: points of level, brightness and impurity. */
function run(points: readonly [number, number, number | null][], changes: Changes = {}): string {
  const { title = 'A', impurity = 'collected.multiphoton', brightness = 'signal.single' } = changes;
  const folder = join(freshFolder(), 'run');
  mkdirSync(folder);
  const document = {
    format: 'pulsewright.front/1',
    version: changes.version ?? '0.1.0',
    study: { title, hash: `hash of ${title}`, seed: 1 },
    goal: { impurity, brightness, at_least: null },
    points: points.map(([level, bright, impure], i) => ({
      ...{ level, design: `designs/0${i + 1}.yaml` },
      figures: {
        filtered: null,
        signal: { single: bright, mean: bright },
        collected: { multiphoton: impure, g2: impure },
        phonons: { method: changes.phonons ?? 'none', flags: [] },
      },
    })),
  };
  writeFileSync(join(folder, 'front.json'), JSON.stringify(document));
  return folder;
}

const a = () =>
  run([
    [0.2, 0.2, 1e-5],
    [0.3, 0.3, 2e-5],
    [0.4, 0.45, 4e-5],
  ]);
const b = (changes: Changes = {}) =>
  run(
    [
      [0.25, 0.25, 1e-7],
      [0.3, 0.35, 2e-7],
      [0.4, 0.4 - 1e-9, 4e-7],
    ],
    { title: 'B', ...changes },
  );

interface Document {
  readonly format: string;
  readonly goal: { impurity: string; brightness: string };
  readonly fronts: readonly { name: string; points: readonly { brightness: number; impurity: number }[] }[];
  readonly levels: readonly { level: number; impurity: readonly number[] }[];
  readonly notes: readonly string[];
}

describe('compare', () => {
  it('draws the fronts in one picture, with a legend by title and the basis at the axes', async () => {
    const out = join(freshFolder(), 'fronts.svg');
    const { code, out: text } = await invoke(['compare', a(), b(), '--out', out]);
    expect(code).toBe(0);
    const svg = readFileSync(out, 'utf8');
    for (const part of ['>A<', '>B<', 'P(n=1), signal', 'P(n≥2), collected', '1e-7'])
      expect(svg).toContain(part);
    expect(svg).not.toMatch(/NaN|undefined/);
    expect(new Resvg(svg, { font: { loadSystemFonts: false } }).render().width).toBeGreaterThan(500);
    expect(text).toMatch(
      /level +1 +2\n0\.250 +2\.00e-5 +1\.00e-7\n0\.300 +2\.00e-5 +2\.00e-7\n0\.400 +4\.00e-5 +4\.00e-7/,
    );
    expect(text).toContain(`file: ${out}`);
  });

  it('gives at each common level the least impurity of a design that reaches it', async () => {
    const { code, out } = await invoke(['compare', a(), b(), '--json']);
    expect(code).toBe(0);
    const document = JSON.parse(out) as Document;
    expect(document.format).toBe('pulsewright.compare/1');
    expect(document.goal).toEqual({ impurity: 'collected.multiphoton', brightness: 'signal.single' });
    // 0.2 lies below the second front; 0.25 of the first is served by its design at 0.3.
    expect(document.levels).toEqual([
      { level: 0.25, impurity: [2e-5, 1e-7] },
      { level: 0.3, impurity: [2e-5, 2e-7] },
      { level: 0.4, impurity: [4e-5, 4e-7] },
    ]);
    expect(document.fronts.map(({ name }) => name)).toEqual(['A', 'B']);
    expect(document.fronts[0].points).toHaveLength(3);
    expect(document.notes).toEqual([]);
  });

  it('tells runs of one title apart, and says in what they differ', async () => {
    const [first, second] = [a(), b({ title: 'A', phonons: 'exact', version: '0.2.0' })];
    const { fronts, notes } = JSON.parse(
      (await invoke(['compare', first, second, '--json'])).out,
    ) as Document;
    expect(fronts.map(({ name }) => name)).toEqual([`A (${first})`, `A (${second})`]);
    expect(notes[0]).toContain('phonons differ');
    expect(notes[1]).toContain('0.2.0');
  });

  it('says what each reaches where no level is common', async () => {
    const out = join(freshFolder(), 'x.svg');
    const far = run([[0.8, 0.8, 1e-3]], { title: 'far' });
    const empty = run([[0.3, 0.3, null]], { title: 'empty' });
    const { code, out: text } = await invoke(['compare', a(), far, empty, '--out', out]);
    expect(code).toBe(0);
    expect(text).toContain(
      'no level in common; brightness reached: 1: 0.200 to 0.450; 2: 0.800 to 0.800; 3: nothing',
    );
  });

  it('takes what optimize writes, and only front.json of it', async () => {
    const folder = freshFolder();
    await invoke(['optimize', studyFile(FREE), '--out', folder, '--workers', '1']);
    for (const name of ['ledger.jsonl', 'study.yaml', 'designs'])
      rmSync(join(folder, name), { recursive: true });
    const { code, out } = await invoke([
      'compare',
      folder,
      run([[0.5, 0.5, 1e-3]], { title: 'B' }),
      '--json',
    ]);
    expect(code).toBe(0);
    const front = JSON.parse(readFileSync(join(folder, 'front.json'), 'utf8')) as {
      points: { figures: { signal: { single: number } } }[];
    };
    const { fronts } = JSON.parse(out) as Document;
    expect(fronts[0].points.map((p) => p.brightness)).toEqual(
      front.points.map((p) => p.figures.signal.single),
    );
  });

  it.each([
    [
      'impurity',
      'collected.g2',
      /collected\.multiphoton against signal\.single; .* collected\.g2 against signal\.single/,
    ],
    ['brightness', 'signal.mean', /against signal\.single; .* collected\.multiphoton against signal\.mean/],
  ])('refuses another %s and names both', async (key, value, message) => {
    const out = join(freshFolder(), 'fronts.svg');
    const { code, err } = await invoke(['compare', a(), b({ [key]: value }), '--out', out]);
    expect(code).toBe(2);
    expect(err).toMatch(message);
    expect(existsSync(out)).toBe(false);
  });

  it('refuses what is no finished run', async () => {
    const unfinished = freshFolder();
    const missing = await invoke(['compare', a(), unfinished, '--json']);
    expect(missing.code).toBe(2);
    expect(missing.err).toContain(`${unfinished}: holds no finished run`);
    for (const [text, message] of [
      ['{"format":"pulsewright.front/2"}', 'pulsewright.front/2; this version reads pulsewright.front/1'],
      ['{"form', 'is no JSON document'],
      ['[]', 'has no format'],
      ['null', 'has no format'],
      ['{"format":"pulsewright.front/1","points":[{}]}', 'is damaged'],
    ]) {
      writeFileSync(join(unfinished, 'front.json'), text);
      const { code, err } = await invoke(['compare', a(), unfinished, '--json']);
      expect(code).toBe(2);
      expect(err).toContain(message);
    }
  });

  it('refuses too few runs, one given twice, and a picture without a place', async () => {
    const one = a();
    expect((await invoke(['compare', one, '--json'])).err).toContain('got 1 run directory; needs 2 to 6');
    expect((await invoke(['compare', one, one, '--json'])).err).toContain('is given twice');
    expect((await invoke(['compare', one, b()])).err).toContain('--out: got nothing');
    expect((await invoke(['compare', one, b(), '--out', 'fronts.png'])).err).toContain('ends in .svg');
    const nowhere = await invoke(['compare', one, b(), '--out', '/nowhere/fronts.svg']);
    expect(nowhere.code).toBe(2);
    expect(nowhere.err).toContain('/nowhere/fronts.svg: no such file or directory');
  });
});
