import { describe, expect, it } from 'vitest';
import { type Design, evaluate } from '../../core/index.js';
import { at, comparablePaths, disagreements, readGolden, unknowablePaths } from './compare.js';

interface Row {
  readonly name: string;
  readonly design: Design;
  readonly figures: { readonly nominal: Tree | null } & Tree;
}
type Tree = { [key: string]: unknown };
interface Golden {
  readonly provenance: { readonly scipy: string; readonly seed: number };
  readonly rows: readonly Row[];
}

function compare(figures: unknown, golden: Tree): string[] {
  const nulls = unknowablePaths(golden)
    .filter((path) => at(figures, path) !== null)
    .map((path) => `${path}: got ${String(at(figures, path))}, but six moments do not bound it`);
  return [...disagreements(figures, golden, comparablePaths(golden)), ...nulls];
}

/** Two filter modes or many drift nodes take seconds on an idle core, and more when the machine is shared. */
const TIMEOUT = 180_000;

describe.each(['two-level', 'cascade'])('random %s designs, evaluated independently with SciPy', (kind) => {
  const { rows, provenance } = readGolden<Golden>(`./scipy-${kind}.json`);

  it.each(rows.map((row) => [row.name, row] as const))(
    `%s (seed ${provenance.seed})`,
    (_, row) => {
      const figures = evaluate(row.design, 'quoted');
      expect(figures.accuracy.error_estimate).toBeLessThanOrEqual(1e-6);
      expect(compare(figures, row.figures)).toEqual([]);
      if (row.figures.nominal) expect(compare(figures.nominal, row.figures.nominal)).toEqual([]);
      else expect(figures.nominal).toBeNull();
    },
    TIMEOUT,
  );
});
