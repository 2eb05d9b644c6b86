/** A non-dominated solution: its objectives (all minimised) and what it belongs to. */
export interface ArchiveEntry<T> {
  readonly objectives: readonly number[];
  readonly item: T;
}

/** True when `a` is at least as good as `b` in every objective and better in one (all minimised). */
export function dominates(a: readonly number[], b: readonly number[]): boolean {
  let better = false;
  for (let i = 0; i < a.length; i++) {
    if (!(a[i] <= b[i])) return false;
    if (a[i] < b[i]) better = true;
  }
  return better;
}

/** Lexicographic order of two vectors of equal length. */
export function lexicographic(a: readonly number[], b: readonly number[]): number {
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return a[i] - b[i];
  return 0;
}

/**
 * Unbounded archive of non-dominated solutions, kept in lexicographic order of the objectives. Of two solutions with
 * the same objectives the one that `prefer` orders first stays (without `prefer` the earlier one), so with a total
 * order the contents do not depend on the order of insertion. Vectors with NaN or an infinity are never taken.
 */
export class Archive<T> {
  readonly #entries: ArchiveEntry<T>[] = [];
  readonly #prefer: (a: T, b: T) => number;

  constructor(prefer: (a: T, b: T) => number = () => 0) {
    this.#prefer = prefer;
  }

  get entries(): readonly ArchiveEntry<T>[] {
    return this.#entries;
  }

  /** Takes a solution unless a member dominates or equals it; says whether it was taken. */
  add(objectives: readonly number[], item: T): boolean {
    if (!objectives.every(Number.isFinite)) return false;
    const entries = this.#entries;
    const at = this.#position(objectives);
    const equal = entries[at];
    if (equal !== undefined && lexicographic(equal.objectives, objectives) === 0) {
      if (this.#prefer(item, equal.item) >= 0) return false;
      entries[at] = { objectives: [...objectives], item };
      return true;
    }
    // Whoever dominates the newcomer stands before it, whoever it dominates after it. With two objectives the
    // neighbour before is the one with the least second objective, and the dominated ones follow without a gap.
    if (objectives.length === 2) {
      if (at > 0 && entries[at - 1].objectives[1] <= objectives[1]) return false;
      let end = at;
      while (end < entries.length && entries[end].objectives[1] >= objectives[1]) end++;
      entries.splice(at, end - at, { objectives: [...objectives], item });
      return true;
    }
    for (let i = 0; i < at; i++) if (dominates(entries[i].objectives, objectives)) return false;
    let kept = at;
    for (let i = at; i < entries.length; i++) {
      if (!dominates(objectives, entries[i].objectives)) entries[kept++] = entries[i];
    }
    entries.length = kept;
    entries.splice(at, 0, { objectives: [...objectives], item });
    return true;
  }

  /** First place whose entry is not lexicographically before `objectives`. */
  #position(objectives: readonly number[]): number {
    let low = 0;
    let high = this.#entries.length;
    while (low < high) {
      const middle = (low + high) >>> 1;
      if (lexicographic(this.#entries[middle].objectives, objectives) < 0) low = middle + 1;
      else high = middle;
    }
    return low;
  }
}
