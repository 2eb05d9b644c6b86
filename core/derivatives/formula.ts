/**
 * A number that is averaged over drift, by its path in a sample: `emitted.*` and `filtered.*` as in the tree of figures,
 * `signal.*` and `collected.*` with `mean`, `factorial2`, `p0`, `single`, `multiphoton`, `leakage`, `pulse.*`.
 */
export type Scalar = string;

/** First-order change of a figure: Σ coefficient · change of the scalar. */
export type Terms = readonly (readonly [scalar: Scalar, coefficient: number])[];

/** How a figure is made from scalars. */
export interface Formula {
  readonly scalars: readonly Scalar[];
  /** From these values of the scalars; null where the figure does not exist. */
  value(value: (scalar: Scalar) => number | null): number | null;
  /** At these values of the scalars; null where the figure does not exist. */
  terms(value: (scalar: Scalar) => number | null): Terms | null;
}

const COUNTS = ['mean', 'single', 'multiphoton'];
const PULSE = ['energy_pi_units', 'energy_fj', 'duration_ps', 'bandwidth_ghz', 'peak_rabi_per_ps'];

/** Figures that are means over drift themselves. */
const SCALARS: ReadonlySet<Scalar> = new Set([
  ...['mean', 'factorial2', 'p.0', 'p.1', 'p.2', 'p.3', 'multiphoton'].map((name) => `emitted.${name}`),
  ...['mean', 'factorial2', 'p.0', 'p.1', 'multiphoton'].map((name) => `filtered.${name}`),
  ...['signal', 'collected'].flatMap((basis) => COUNTS.map((name) => `${basis}.${name}`)),
  'collected.leakage',
  ...PULSE.map((name) => `pulse.${name}`),
]);

const BASES: ReadonlySet<string> = new Set(['emitted', 'filtered', 'signal', 'collected']);

/** Itself. */
export const identity = (scalar: Scalar): Formula => ({
  scalars: [scalar],
  value: (value) => value(scalar),
  terms: (value) => (value(scalar) === null ? null : [[scalar, 1]]),
});

/** P(n≥1), from numbers that do not cancel. */
function atLeastOne(basis: string): Formula {
  const scalars = [`${basis}.single`, `${basis}.multiphoton`];
  return {
    scalars,
    value(value) {
      const [one, more] = scalars.map(value);
      return one === null || more === null ? null : one + more;
    },
    terms: (value) =>
      scalars.some((scalar) => value(scalar) === null) ? null : scalars.map((scalar) => [scalar, 1]),
  };
}

/** ⟨n(n−1)⟩/⟨n⟩². */
function correlation(basis: string): Formula {
  const [mean, factorial2] = [`${basis}.mean`, `${basis}.factorial2`];
  return {
    scalars: [mean, factorial2],
    value(value) {
      const [m1, m2] = [value(mean), value(factorial2)];
      return m1 !== null && m2 !== null && m1 > 0 ? m2 / (m1 * m1) : null;
    },
    terms(value) {
      const [m1, m2] = [value(mean), value(factorial2)];
      if (m1 === null || m2 === null || !(m1 > 0)) return null;
      return [
        [mean, (-2 * m2) / m1 ** 3],
        [factorial2, 1 / (m1 * m1)],
      ];
    },
  };
}

/** The formula of a figure by its path in the tree of figures; null for figures without derivatives, such as quantiles. */
export function formulaOf(figure: string): Formula | null {
  if (SCALARS.has(figure)) return identity(figure === 'collected.leakage' ? 'leakage' : figure);
  const [basis, name] = figure.split('.', 2);
  if (!BASES.has(basis) || figure !== `${basis}.${name}`) return null;
  if (name === 'any' && (basis === 'signal' || basis === 'collected')) return atLeastOne(basis);
  return name === 'g2' ? correlation(basis) : null;
}
