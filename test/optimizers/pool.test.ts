import { describe, expect, it } from 'vitest';
import { type ProblemSpec, type SearchOutcome, search, type TaskResult } from '../../optimizers/index.js';
import { workerPool } from '../../optimizers/workers/pool.js';
import { range, toySpec } from './toy.js';

// Worker threads run the built entry (dist/), with core's own evaluation. What is promised: see `search`.

/** One resonant Gaussian tone, two free parameters, cheap to integrate. */
function realSpec(evaluations: number): ProblemSpec {
  const spec = toySpec(evaluations, 3, [
    range('pulse.tones.0.fwhm', 2, 12, 'log'),
    range('pulse.tones.0.area', 0.5 * Math.PI, 3.5 * Math.PI),
  ]);
  const [tone] = spec.design.pulse.tones;
  return { ...spec, design: { ...spec.design, pulse: { ...spec.design.pulse, tones: [tone] } } };
}

const result = ({ archive, front, best, stages }: SearchOutcome) =>
  JSON.stringify({ archive, front, best, stages });

describe('worker threads', () => {
  it('give the same archive and front as one thread, also after an interruption', async () => {
    const spec = realSpec(150);
    const ledger = new Map<string, TaskResult>();
    const controller = new AbortController();
    const serial = await search(spec, { workers: 1, completed: new Map(), onTask: () => {} });
    const parallel = await search(spec, { workers: 2, completed: new Map(), onTask: () => {} });
    const first = await search(spec, {
      workers: 2,
      completed: new Map(),
      signal: controller.signal,
      onTask: (task) => {
        ledger.set(task.id, JSON.parse(JSON.stringify(task)) as TaskResult);
        if (ledger.size === 3) controller.abort();
      },
    });
    const second = await search(spec, { workers: 3, completed: ledger, onTask: () => {} });
    expect(first.kind).toBe('interrupted');
    expect(result(parallel)).toBe(result(serial));
    expect(result(second)).toBe(result(serial));
    expect(serial.best?.figures.signal.single).toBeGreaterThanOrEqual(0.9);
  });

  it('reject with the message of the task that failed, and go on', async () => {
    const pool = workerPool(realSpec(10), 1);
    const task = { id: '0-x', kind: 'nonsense', index: 0, budget: 1, input: null };
    await expect(pool.run(task)).rejects.toThrow('unknown kind nonsense');
    const points = [[0.5, 0.2]];
    const good = await pool.run({ ...task, id: '1-x', kind: 'sample', input: { points } });
    expect(good.evaluations).toBe(1);
    await pool.close();
    await expect(pool.run(task)).rejects.toThrow('closed');
  });

  it('reject instead of hanging when the worker cannot even build the problem', async () => {
    const broken = toySpec(10, 1, [range('pulse.tones.7.fwhm', 1, 2)]);
    const pool = workerPool(broken, 2);
    const task = { id: '0-x', kind: 'sample', index: 0, budget: 1, input: { points: [[0.5]] } };
    await expect(pool.run(task)).rejects.toThrow(/worker thread failed.*pulse\.tones\.7\.fwhm/);
    await pool.close();
  });
});
