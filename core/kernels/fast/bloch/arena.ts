/**
 * Memory that is used anew by every sweep: fresh arrays of this size would be cleared and collected each time, which
 * costs as much as a count.
 */
let memory = new Float64Array(1 << 14);
let used = 0;

/** Gives all memory back; what was taken before must not be used any more. */
export function resetArena(): void {
  used = 0;
}

/** Numbers of any value. */
export function take(length: number): Float64Array {
  if (used + length > memory.length) {
    // What was taken stays where it is.
    memory = new Float64Array(Math.max(2 * memory.length, length));
    used = 0;
  }
  used += length;
  return memory.subarray(used - length, used);
}

/** Zeros. */
export function takeZeros(length: number): Float64Array {
  return take(length).fill(0);
}
