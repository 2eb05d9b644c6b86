import { hasFree, resultOf, type SharedBatch, sharedBatch } from './shared-batch.js';

/** Work that is not worth the way to another thread: a single item. */
const LEAST = 2;

/**
 * Computes items one after another, and hands over what is left as soon as some worker has nothing to do. The results
 * are the same whoever computes them, since `compute` is a pure function.
 * @param idle how many workers have nothing to do, in shared memory
 * @param publish offers a batch to them
 */
export function sharingMap<Item, Result>(
  idle: Int32Array,
  publish: (batch: SharedBatch<Item>) => void,
  compute: (item: Item) => Result,
): (items: readonly Item[]) => Result[] {
  return (items) => {
    const results: Result[] = [];
    while (results.length < items.length) {
      const left = items.length - results.length;
      if (left >= LEAST && Atomics.load(idle, 0) > 0) {
        const batch = sharedBatch(items.slice(results.length));
        publish(batch);
        return [...results, ...batch.items.map((_, i) => resultOf(batch, i, compute))];
      }
      results.push(compute(items[results.length]));
    }
    return results;
  };
}

/** Batches that still have something to do, by who offered them. */
export class OpenBatches<Owner> {
  readonly #batches = new Map<Owner, SharedBatch>();

  open(owner: Owner, batch: SharedBatch): void {
    this.#batches.set(owner, batch);
  }

  /** One with free items; null when there is none. */
  any(): SharedBatch | null {
    for (const [owner, batch] of this.#batches) {
      if (hasFree(batch)) return batch;
      this.#batches.delete(owner);
    }
    return null;
  }
}
