import { deserialize, serialize } from 'node:v8';

/** States of an item. Whoever turns it from free to taken computes it. */
const FREE = 0;
const TAKEN = 1;
const DONE = 2;
const FAILED = 3;

/** Bytes for one result, some four times what figures with drift and notes take. */
const SLOT = 1 << 13;

/** Independent pieces of work of one kind that several threads share out among themselves; in shared memory. */
export interface SharedBatch<Item = unknown> {
  readonly items: readonly Item[];
  readonly states: Int32Array;
  /** Length of each result in bytes. */
  readonly lengths: Int32Array;
  readonly bytes: Uint8Array;
}

export function sharedBatch<Item>(items: readonly Item[]): SharedBatch<Item> {
  const count = items.length;
  return {
    items,
    states: new Int32Array(new SharedArrayBuffer(4 * count)),
    lengths: new Int32Array(new SharedArrayBuffer(4 * count)),
    bytes: new Uint8Array(new SharedArrayBuffer(SLOT * count)),
  };
}

export function hasFree({ states }: SharedBatch): boolean {
  return states.some((_, i) => Atomics.load(states, i) === FREE);
}

const claim = (states: Int32Array, i: number) => Atomics.compareExchange(states, i, FREE, TAKEN) === FREE;

function settle(states: Int32Array, i: number, state: number): void {
  Atomics.store(states, i, state);
  Atomics.notify(states, i);
}

/** Puts the result into its slot; false when there is no room for it. */
function write({ lengths, bytes }: SharedBatch, i: number, result: unknown): boolean {
  const data = serialize(result);
  if (data.length > SLOT) return false;
  bytes.set(data, i * SLOT);
  lengths[i] = data.length;
  return true;
}

function read({ lengths, bytes }: SharedBatch, i: number): unknown {
  // The reader of serialised values takes no shared memory.
  return deserialize(Buffer.from(bytes.slice(i * SLOT, i * SLOT + lengths[i])));
}

/**
 * Computes what is still free, from the end, where the owner comes last. What throws is left to the owner, who then
 * meets the error itself.
 */
export function helpWith<Item>(batch: SharedBatch<Item>, compute: (item: Item) => unknown): void {
  const { items, states } = batch;
  for (let i = items.length - 1; i >= 0; i--) {
    if (!claim(states, i)) continue;
    let state = FAILED;
    try {
      if (write(batch, i, compute(items[i]))) state = DONE;
    } catch {
      state = FAILED;
    }
    settle(states, i, state);
  }
}

/** The owner's way to the result of an item: computes it, or waits for the helper that took it. */
export function resultOf<Item, Result>(
  batch: SharedBatch<Item>,
  i: number,
  compute: (item: Item) => Result,
): Result {
  const { items, states } = batch;
  if (claim(states, i)) return compute(items[i]);
  while (Atomics.load(states, i) === TAKEN) Atomics.wait(states, i, TAKEN);
  return Atomics.load(states, i) === DONE ? (read(batch, i) as Result) : compute(items[i]);
}
