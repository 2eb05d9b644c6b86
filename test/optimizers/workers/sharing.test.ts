import { Worker } from 'node:worker_threads';
import { describe, expect, it } from 'vitest';
import { hasFree, helpWith, resultOf, sharedBatch } from '../../../optimizers/workers/shared-batch.js';
import { OpenBatches, sharingMap } from '../../../optimizers/workers/sharing.js';

const idleCount = (count: number) => new Int32Array(new SharedArrayBuffer(4)).fill(count);
const square = (x: number) => ({ x, y: x * x, none: null, far: Number.NEGATIVE_INFINITY });

describe('shared batches', () => {
  it('give the owner what a helper computed, to the bit', () => {
    const batch = sharedBatch([1 / 3, -0, 5e-324]);
    expect(hasFree(batch)).toBe(true);
    helpWith(batch, square);
    expect(hasFree(batch)).toBe(false);
    const idle = () => expect.fail('computed twice');
    expect(batch.items.map((_, i) => resultOf(batch, i, idle))).toEqual([1 / 3, -0, 5e-324].map(square));
  });

  it('leave to the owner what throws or is too long for a slot', () => {
    const batch = sharedBatch(['throws', 'x'.repeat(100_000), 'short']);
    helpWith(batch, (text) => {
      if (text === 'throws') throw new Error('the helper hides it');
      return text;
    });
    const own: string[] = [];
    const compute = (text: string) => {
      own.push(text);
      if (text === 'throws') throw new RangeError('the owner meets it');
      return text;
    };
    expect(() => resultOf(batch, 0, compute)).toThrow(RangeError);
    expect(resultOf(batch, 1, compute)).toHaveLength(100_000);
    expect(resultOf(batch, 2, compute)).toBe('short');
    expect(own).toHaveLength(2);
  });

  it('make the owner wait for what another thread has taken', async () => {
    const batch = sharedBatch([2]);
    batch.states[0] = 1;
    const thread = `
      const { workerData: { states } } = require('node:worker_threads');
      setTimeout(() => { Atomics.store(states, 0, 3); Atomics.notify(states, 0); }, 200);`;
    const worker = new Worker(thread, { eval: true, workerData: batch });
    const began = performance.now();
    expect(resultOf(batch, 0, (x) => 10 * x)).toBe(20);
    expect(performance.now() - began).toBeGreaterThan(150);
    await worker.terminate();
  });
});

describe('sharing out', () => {
  it('does not bother others while all are busy, nor with a single item', () => {
    const busy = sharingMap<number, number>(idleCount(0), () => expect.fail('published'), Math.sqrt);
    expect(busy([1, 4, 9])).toEqual([1, 2, 3]);
    const single = sharingMap<number, number>(idleCount(3), () => expect.fail('published'), Math.sqrt);
    expect(single([16])).toEqual([4]);
  });

  it('hands over the rest once a worker has nothing to do', () => {
    const idle = idleCount(0);
    const own: number[] = [];
    let offered: readonly unknown[] = [];
    const map = sharingMap<number, number>(
      idle,
      (batch) => {
        offered = batch.items;
        helpWith(batch, (x) => -x);
      },
      (x) => {
        own.push(x);
        if (own.length === 2) idle[0] = 1;
        return x;
      },
    );
    expect(map([1, 2, 3, 4])).toEqual([1, 2, -3, -4]);
    expect(offered).toEqual([3, 4]);
    expect(own).toEqual([1, 2]);
  });

  it('forgets batches that are done', () => {
    const open = new OpenBatches<string>();
    expect(open.any()).toBeNull();
    const [first, second] = [sharedBatch([1]), sharedBatch([2])];
    open.open('a', first);
    open.open('b', second);
    expect(open.any()).toBe(first);
    helpWith(first, square);
    expect(open.any()).toBe(second);
    helpWith(second, square);
    expect(open.any()).toBeNull();
  });
});
