import { Writable } from 'node:stream';
import { describe, expect, it } from 'vitest';
import { progressBar } from '../../../cli/report/progress.js';

function stream(isTTY: boolean): { sink: Writable; text: () => string } {
  let text = '';
  const sink = new Writable({
    write(chunk, _encoding, done) {
      text += String(chunk);
      done();
    },
  });
  return { sink: Object.assign(sink, { isTTY, columns: 120 }), text: () => text };
}

async function run(isTTY: boolean): Promise<string> {
  const { sink, text } = stream(isTTY);
  const bar = progressBar(sink, 'evaluations');
  bar.update({ stage: 'explore', done: 0, total: 1000, best: '' });
  await new Promise((resume) => setTimeout(resume, 600));
  bar.update({ stage: 'polish', done: 250, total: 1000, best: 'best 1.2e-4 at 0.6' });
  await new Promise((resume) => setTimeout(resume, 300));
  bar.stop();
  return text();
}

describe('progress', () => {
  it('shows evaluations, stage, best so far and the time left on a terminal', async () => {
    const text = await run(true);
    expect(text).toContain('250/1000 evaluations · polish · best 1.2e-4 at 0.6 · about ');
    expect(text).toMatch(/about \d+(\.\d)? s left/);
  });

  it('is quiet elsewhere', async () => {
    expect(await run(false)).toBe('');
  });
});
