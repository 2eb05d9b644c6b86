/*
 * Work space that is handed out from the front of one buffer and given back as a whole: a fresh array of this size costs as
 * much as a hundred steps on it. Whatever is taken is zero; nothing taken may outlive the call.
 */

let buffer = new Float64Array(1 << 15);
let used = 0;
/** Most that was asked for at once. */
let peak = 0;

/** Zeros that stand until the enclosing `withArena` ends. */
export function take(length: number): Float64Array {
  const start = used;
  used += length;
  peak = Math.max(peak, used);
  if (used > buffer.length) return new Float64Array(length);
  const out = buffer.subarray(start, used);
  out.fill(0);
  return out;
}

/** Gives back all that was taken during the call. Calls may stand in one another. */
export function withArena<T>(call: () => T): T {
  const mark = used;
  try {
    return call();
  } finally {
    used = mark;
    if (mark === 0 && peak > buffer.length) buffer = new Float64Array(2 * peak);
  }
}
