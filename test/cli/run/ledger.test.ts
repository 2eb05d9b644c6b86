import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { Ledger } from '../../../cli/run/ledger.js';
import { checkHeader, LEDGER_FORMAT, parseLedger, readLedger } from '../../../cli/run/ledger-format.js';
import type { TaskResult } from '../../../optimizers/index.js';
import { freshFolder } from '../commands/invoke.js';

const header = { format: LEDGER_FORMAT, study: 'abc', version: '1.0.0', seed: 7 };
const task = (id: string): TaskResult => ({ id, evaluations: 3, points: [], summary: { text: 'µ ≥ 2' } });
const entries = ['0-explore', '1-explore', '2-polish'].map((id, i) => ({ task: task(id), wall: i + 0.5 }));

async function written(): Promise<{ path: string; bytes: Buffer }> {
  const path = join(freshFolder(), 'ledger.jsonl');
  const ledger = await Ledger.begin(path, header);
  for (const entry of entries) await ledger.append(entry);
  await ledger.close();
  return { path, bytes: readFileSync(path) };
}

describe('ledger', () => {
  it('gives back what was appended', async () => {
    const { path } = await written();
    expect(await readLedger(path)).toMatchObject({ header, entries, damaged: null });
    expect(await readLedger(join(freshFolder(), 'none'))).toBeNull();
  });

  it('keeps the order and the lines of appends that overlap', async () => {
    const path = join(freshFolder(), 'ledger.jsonl');
    const ledger = await Ledger.begin(path, header);
    const long = 'x'.repeat(2_000_000);
    await Promise.all(
      [0, 1, 2, 3].map((i) => ledger.append({ task: { ...task(`${i}`), summary: long }, wall: i })),
    );
    await ledger.close();
    expect((await readLedger(path))?.entries.map((e) => e.task.id)).toEqual(['0', '1', '2', '3']);
  });

  it('tolerates a kill after any byte: complete lines count, the rest is cut', async () => {
    const { bytes } = await written();
    const ends = [...bytes.keys()].filter((i) => bytes[i] === 10).map((i) => i + 1);
    for (let length = 0; length <= bytes.length; length++) {
      const content = parseLedger(bytes.subarray(0, length));
      const complete = ends.filter((end) => end <= length).length;
      expect(content.header === null).toBe(complete === 0);
      expect(content.entries).toEqual(entries.slice(0, Math.max(0, complete - 1)));
      expect(content.sound).toBe(complete === 0 ? 0 : ends[complete - 1]);
      expect(content.damaged).toBeNull();
    }
  });

  it('appends after the last sound line', async () => {
    const { path, bytes } = await written();
    writeFileSync(path, bytes.subarray(0, bytes.length - 9));
    const { sound } = (await readLedger(path))!;
    const ledger = await Ledger.continue(path, sound);
    await ledger.append(entries[2]);
    await ledger.close();
    expect(readFileSync(path).equals(bytes)).toBe(true);
  });

  it('stops at a damaged line and says which one', async () => {
    const { bytes } = await written();
    const lines = bytes.toString('utf8').split('\n');
    lines[2] = lines[2].slice(0, 20);
    const content = parseLedger(Buffer.from(lines.join('\n')));
    expect(content.damaged).toBe(3);
    expect(content.entries).toEqual(entries.slice(0, 1));
  });

  it.each([
    '',
    '{"format":',
    'no header\n',
    '{"task":{"id":"0","evaluations":1,"points":[]},"wall":1}\n',
    '[]\n',
    'null\n',
  ])('has no header in %j', (text) => {
    expect(parseLedger(Buffer.from(text))).toMatchObject({ header: null, entries: [], sound: 0 });
  });

  it.each([
    ['format', 'pulsewright.ledger/9'],
    ['study', 'def'],
    ['version', '0.9.0'],
    ['seed', 8],
  ])('refuses another %s and names both', (field, value) => {
    const found = { ...header, [field]: value };
    const both = new RegExp(`${field} ${value};.*${field} ${header[field as keyof typeof header]}`);
    expect(() => checkHeader(found, header, 'run/ledger.jsonl')).toThrow(both);
    expect(() => checkHeader(header, header, 'run/ledger.jsonl')).not.toThrow();
  });
});
