import { describe, expect, it } from 'vitest';
import { UnsupportedDesign } from '../../../core/index.js';
import {
  type FiguresInput,
  type ProblemSpec,
  type SearchOutcome,
  search,
  type TaskResult,
} from '../../../optimizers/index.js';
import { workerPool } from '../../../optimizers/workers/pool.js';
import { range, toySpec } from '../toy.js';

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

  it('keep the class of an error about a design', async () => {
    const spec = realSpec(10);
    const pool = workerPool(spec, 1);
    const hot = { coupling: 0.03, cutoff: 2.2, temperature: 4000, method: 'auto' as const };
    const design = { ...spec.design, emitter: { ...spec.design.emitter, phonons: hot } };
    const input: FiguresInput = { designs: [spec.design, design], accuracy: 'search' };
    const task = { id: 'hot', kind: 'figures', index: 0, budget: 1, input };
    await expect(pool.run(task)).rejects.toBeInstanceOf(UnsupportedDesign);
    await pool.close();
  });

  it('share out the batches of one task without changing its result', async () => {
    const spec = realSpec(10);
    const points = Array.from({ length: 24 }, (_, i) => [i / 23, ((5 * i) % 24) / 23]);
    const task = { id: '0-x', kind: 'sample', index: 0, budget: 24, input: { points } };
    const results: unknown[] = [];
    for (const size of [1, 3]) {
      const pool = workerPool(spec, size);
      results.push(await pool.run(task));
      await pool.close();
    }
    expect(results[1]).toEqual(results[0]);
  });

  it('end whether they are idle, at work or still loading, and once only', async () => {
    const points = Array.from({ length: 4000 }, (_, i) => [i / 4000, 0.9]);
    const task = { id: '0-x', kind: 'sample', index: 0, budget: 1, input: { points } };
    const pool = workerPool(realSpec(10), 2);
    await pool.run(task);
    const long = pool.run({ ...task, id: '1-x', budget: 4000 });
    const given = expect(long).rejects.toThrow('the pool is closed');
    await Promise.all([pool.close(), pool.close(), workerPool(realSpec(10), 2).close()]);
    await given;
  });

  it('reject instead of hanging when the worker cannot even build the problem', async () => {
    const broken = toySpec(10, 1, [range('pulse.tones.7.fwhm', 1, 2)]);
    const pool = workerPool(broken, 2);
    const task = { id: '0-x', kind: 'sample', index: 0, budget: 1, input: { points: [[0.5]] } };
    await expect(pool.run(task)).rejects.toThrow(/worker thread failed.*pulse\.tones\.7\.fwhm/);
    await pool.close();
  });
});
