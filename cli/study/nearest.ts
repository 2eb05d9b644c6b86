/** Optimal string alignment distance: insertions, deletions, changes and swaps of neighbours (Damerau, CACM 7, 171 (1964)). */
function distance(a: string, b: string): number {
  let before: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      let least = Math.min(last[j] + 1, row[j - 1] + 1, last[j - 1] + (a[i - 1] === b[j - 1] ? 0 : 1));
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1])
        least = Math.min(least, before[j - 2] + 1);
      row.push(least);
    }
    before = last;
    last = row;
  }
  return last[b.length];
}

/** The known name nearest to a misspelt one, or null where none is near (a third of its letters wrong at most). */
export function nearestName(name: string, known: readonly string[]): string | null {
  if (name.length > 64) return null;
  let best: string | null = null;
  let least = Number.POSITIVE_INFINITY;
  const plain = (text: string) => text.toLowerCase().replace(/[-\s]/g, '_');
  for (const candidate of known) {
    const d = distance(plain(name), plain(candidate));
    if (d < least) {
      least = d;
      best = candidate;
    }
  }
  return best !== null && least <= Math.max(1, Math.ceil(Math.max(name.length, best.length) / 3))
    ? best
    : null;
}
