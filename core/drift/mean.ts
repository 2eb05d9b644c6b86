/** A tree of plain data whose numeric leaves can be averaged. */
export type Tree = number | null | readonly Tree[] | { readonly [key: string]: Tree };

/** Leaf by leaf Σ w·x over trees of one shape; a leaf that is null in any of them is null in the mean. */
export function weightedMean<T>(trees: readonly T[], weights: readonly number[]): T {
  return meanOf(trees as unknown as readonly Tree[], weights) as unknown as T;
}

function meanOf(trees: readonly Tree[], weights: readonly number[]): Tree {
  const [head] = trees;
  if (trees.some((t) => t === null)) return null;
  if (typeof head === 'number') {
    return (trees as readonly number[]).reduce((sum, x, k) => sum + weights[k] * x, 0);
  }
  if (Array.isArray(head)) {
    return head.map((_, i) =>
      meanOf(
        (trees as readonly Tree[][]).map((t) => t[i]),
        weights,
      ),
    );
  }
  const keys = Object.keys(head as object);
  const records = trees as readonly { readonly [key: string]: Tree }[];
  return Object.fromEntries(
    keys.map((key) => [
      key,
      meanOf(
        records.map((t) => t[key]),
        weights,
      ),
    ]),
  );
}
