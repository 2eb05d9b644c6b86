import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { openRun } from '../../../cli/run/directory.js';
import { LEDGER_FORMAT } from '../../../cli/run/ledger-format.js';
import { freshFolder } from '../commands/invoke.js';

const header = { format: LEDGER_FORMAT, study: 'abc', version: '1.0.0', seed: 7 };
const study = Buffer.from('pulsewright: 1\n');

async function open(directory: string, resume = false) {
  const run = await openRun({ directory, resume, header, study });
  await run.close();
  return run;
}

describe('run directory', () => {
  it('is made with its parents, ledger and study in it', async () => {
    const directory = join(freshFolder(), 'a', 'b');
    await open(directory);
    expect(readdirSync(directory).sort()).toEqual(['ledger.jsonl', 'study.yaml']);
    expect(readFileSync(join(directory, 'ledger.jsonl'), 'utf8')).toBe(`${JSON.stringify(header)}\n`);
  });

  it.each(['notes.txt', '.hidden', 'designs/mine.yaml', 'front.csv.bak'])(
    'refuses a directory with %s',
    async (name) => {
      const directory = freshFolder();
      mkdirSync(join(directory, 'designs'));
      writeFileSync(join(directory, name), 'mine');
      await expect(open(directory)).rejects.toThrow(`is not empty (${name})`);
      expect(existsSync(join(directory, 'ledger.jsonl'))).toBe(false);
      expect(readFileSync(join(directory, name), 'utf8')).toBe('mine');
    },
  );

  it('counts as empty when it holds only files of a run without its ledger', async () => {
    const directory = freshFolder();
    mkdirSync(join(directory, 'designs'));
    for (const name of [
      'front.csv',
      'front.json',
      'designs/01.yaml',
      'designs/best.yaml',
      '.front.csv.77.tmp',
    ]) {
      writeFileSync(join(directory, name), 'old');
    }
    writeFileSync(join(directory, 'study.yaml'), 'old');
    await open(directory);
    expect(existsSync(join(directory, 'front.csv'))).toBe(false);
    expect(readdirSync(join(directory, 'designs'))).toEqual([]);
  });

  it('does not overwrite a lone study that is another one', async () => {
    const directory = freshFolder();
    writeFileSync(join(directory, 'study.yaml'), 'mine');
    await expect(open(directory)).rejects.toThrow('is another study and would be lost');
    writeFileSync(join(directory, 'study.yaml'), study);
    await open(directory);
  });

  it('refuses what is no directory or cannot be written', async () => {
    const file = join(freshFolder(), 'file');
    writeFileSync(file, '');
    await expect(open(file)).rejects.toThrow('is not a directory');
    await expect(open(join(file, 'below'))).rejects.toThrow('not a directory');
    // Even root cannot make files there.
    await expect(open('/proc/1/run')).rejects.toThrow(/\/proc\/1\/run: (no such file|permission|operation)/);
  });

  it('refuses a run that is there already and names --resume', async () => {
    const directory = freshFolder();
    await open(directory);
    await expect(open(directory)).rejects.toThrow('--resume');
    expect((await open(directory, true)).remarks).toEqual([]);
  });

  it.each(['', '{"format":"pulsewr'])('starts over from the torn header %j', async (text) => {
    const directory = freshFolder();
    writeFileSync(join(directory, 'ledger.jsonl'), text);
    writeFileSync(join(directory, 'front.csv'), 'old');
    const run = await open(directory, true);
    expect(run.entries).toEqual([]);
    expect(run.remarks[0]).toContain('torn or missing');
    expect(readFileSync(join(directory, 'ledger.jsonl'), 'utf8')).toBe(`${JSON.stringify(header)}\n`);
    expect(existsSync(join(directory, 'front.csv'))).toBe(false);
  });

  it('does not touch a run of another study', async () => {
    const directory = freshFolder();
    await open(directory);
    const other = { directory, resume: true, header: { ...header, study: 'def' }, study };
    await expect(openRun(other)).rejects.toThrow(/study abc; .* study def/);
    expect(readFileSync(join(directory, 'ledger.jsonl'), 'utf8')).toBe(`${JSON.stringify(header)}\n`);
  });
});
