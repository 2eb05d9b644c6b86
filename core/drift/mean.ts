/** A tree of plain data whose numeric leaves can be averaged. */
export type Tree = number | null | readonly Tree[] | { readonly [key: string]: Tree };

/** Leaf by leaf Σ w·x over trees of one shape; a leaf that is null in any of them is null in the mean. */
export function weightedMean<T>(trees: readonly T[], weights: readonly number[]): T {
  if (trees.length === 1 && weights[0] === 1) return trees[0];
  return meanOf(trees as unknown as readonly Tree[], weights) as unknown as T;
}

function meanOf(trees: readonly Tree[], weights: readonly number[]): Tree {
  const [head] = trees;
  if (typeof head === 'number') {
    let sum = 0;
    for (let k = 0; k < trees.length; k++) {
      const x = trees[k];
      if (x === null) return null;
      sum += weights[k] * (x as number);
    }
    return sum;
  }
  if (trees.includes(null)) return null;
  if (Array.isArray(head)) {
    const lists = trees as readonly (readonly Tree[])[];
    return head.map((_, i) => meanOf(column(lists, i), weights));
  }
  const records = trees as readonly { readonly [key: string]: Tree }[];
  const mean: Record<string, Tree> = {};
  for (const key of Object.keys(head as object)) mean[key] = meanOf(column(records, key), weights);
  return mean;
}

/** One branch of every tree. */
function column<K extends string | number>(trees: readonly { readonly [key in K]: Tree }[], key: K): Tree[] {
  const out = new Array<Tree>(trees.length);
  for (let k = 0; k < trees.length; k++) out[k] = trees[k][key];
  return out;
}
