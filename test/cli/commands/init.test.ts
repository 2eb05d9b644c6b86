import { readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { starters } from '../../../cli/commands/starters.js';
import { freshFolder, invoke } from './invoke.js';

describe('init', () => {
  it('writes the resonant starter and its schema into a new directory', async () => {
    const folder = join(freshFolder(), 'a', 'b');
    const { code, out } = await invoke(['init', folder]);
    expect(code).toBe(0);
    expect(out).toContain('starter study resonant');
    expect(readdirSync(folder).sort()).toEqual(['study.schema.json', 'study.yaml']);
    const resonant = (await starters()).find(({ name }) => name === 'resonant');
    expect(readFileSync(join(folder, 'study.yaml'), 'utf8')).toBe(resonant?.text);
    const schema = JSON.parse(readFileSync(join(folder, 'study.schema.json'), 'utf8')) as {
      properties: object;
    };
    expect(Object.keys(schema.properties)).toContain('emitter');
  });

  it('has sound starters only', async () => {
    const all = await starters();
    expect(all.map(({ name }) => name)).toEqual(
      expect.arrayContaining(['two-photon', 'side-by-side-resonant', 'side-by-side-two-photon']),
    );
    for (const { name } of all) {
      const folder = freshFolder();
      expect((await invoke(['init', folder, '--starter', name])).code).toBe(0);
      expect((await invoke(['check', join(folder, 'study.yaml')])).code, name).toBe(0);
    }
  });

  it.each(['study.yaml', 'study.schema.json'])('does not overwrite %s and writes nothing', async (name) => {
    const folder = freshFolder();
    writeFileSync(join(folder, name), 'mine');
    const { code, err } = await invoke(['init', folder]);
    expect(code).toBe(2);
    expect(err).toContain(`${name}: exists already`);
    expect(readdirSync(folder)).toEqual([name]);
    expect(readFileSync(join(folder, name), 'utf8')).toBe('mine');
  });

  it('names the nearest starter', async () => {
    const { code, err } = await invoke(['init', freshFolder(), '--starter', 'resonnant']);
    expect(code).toBe(2);
    expect(err).toContain('nearest: resonant');
  });
});
