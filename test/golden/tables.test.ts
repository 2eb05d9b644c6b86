import { describe, expect, it } from 'vitest';
import { type Design, evaluate } from '../../core/index.js';
import { allowance, at, readGolden } from './compare.js';

interface Row {
  readonly name: string;
  readonly source: string;
  readonly design: Design;
  /** `printed`: half a unit of the last digit given. */
  readonly expected: Readonly<Record<string, { readonly value: number; readonly printed: number }>>;
}

const { rows } = readGolden<{ rows: readonly Row[] }>('./tables.json');

describe('tables recomputed with an independent ODE code (values to the digits printed)', () => {
  it.each(rows.map((row) => [row.name, row] as const))('%s', (_, row) => {
    const figures = evaluate(row.design, 'quoted');
    expect(figures.accuracy.error_estimate).toBeLessThanOrEqual(1e-6);
    for (const [path, { value, printed }] of Object.entries(row.expected)) {
      const got = at(figures, path) as number;
      expect(Math.abs(got - value), `${path}: got ${got}, table ${value}`).toBeLessThanOrEqual(
        Math.max(allowance(path, value), 1.5 * printed),
      );
    }
  });
});
