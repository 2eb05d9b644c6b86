import { mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { removeTemporaries, temporaryOf, writeWhole } from '../../../cli/run/whole-file.js';
import { freshFolder } from '../commands/invoke.js';

describe('files written whole or not at all', () => {
  it('replaces a file and leaves nothing beside it', async () => {
    const folder = freshFolder();
    const path = join(folder, 'front.csv');
    writeFileSync(path, 'old');
    await writeWhole(path, 'new');
    expect(readFileSync(path, 'utf8')).toBe('new');
    expect(readdirSync(folder)).toEqual(['front.csv']);
  });

  it('never shows a part of a file to a reader', async () => {
    const path = join(freshFolder(), 'front.csv');
    const versions = ['a', 'b'].map((letter) => letter.repeat(3_000_000));
    await writeWhole(path, versions[0]);
    let writing = true;
    const writer = (async () => {
      for (let i = 1; i <= 10; i++) await writeWhole(path, versions[i % 2]);
      writing = false;
    })();
    let reads = 0;
    while (writing) {
      expect(versions.includes(readFileSync(path, 'utf8'))).toBe(true);
      reads++;
      await new Promise((resume) => setImmediate(resume));
    }
    await writer;
    expect(reads).toBeGreaterThan(5);
  });

  it('keeps what was there when it fails, and cleans up', async () => {
    const folder = freshFolder();
    mkdirSync(join(folder, 'front.csv'));
    await expect(writeWhole(join(folder, 'front.csv'), 'new')).rejects.toThrow('front.csv');
    expect(readdirSync(folder)).toEqual(['front.csv']);
    await expect(writeWhole(join(folder, 'none', 'x'), '')).rejects.toThrow('no such file or directory');
  });

  it('knows its own temporary files and nobody else’s', async () => {
    const folder = freshFolder();
    for (const name of ['.front.csv.12.tmp', '.hidden', 'x.12.tmp']) writeFileSync(join(folder, name), '');
    expect(temporaryOf('.front.csv.12.tmp')).toBe('front.csv');
    await removeTemporaries(folder);
    expect(readdirSync(folder).sort()).toEqual(['.hidden', 'x.12.tmp']);
  });
});
