/*
 * The transmitted light as pairs of events. With a = −√(κ/2)∫c e^{−ν(t−s)}ds, ν = κ/2 + i(ω_f − ω_line), behind a two-sided
 * cavity (physics of cascaded systems: Gardiner; Carmichael, Phys. Rev. Lett. 70, 2269 and 2273 (1993)) the count is
 *   N = (κ/2)∫a†a dt = (κ/4)∬ c†(s) e^{−(κ/2)|s−s'| ∓ …} c(s') ds ds',
 * so that the factorial moment m_d = ⟨:N^d:⟩ sums over d pairs of one event on the left of ρ (c) and one on its right (c†). The
 * earlier event of a pair opens a leg, which is damped by κ/2 until the later one, on the other side, closes it. The operator
 * X_{lrn} collects all histories with l open left legs, r open right legs and n closed pairs:
 *   dX_{lrn}/dt = LX_{lrn} − (lν + rν*)X_{lrn} + √(κ/4)[c(X_{l−1,r,n} + (r+1)X_{l,r+1,n−1}) + (X_{l,r−1,n} + (l+1)X_{l+1,r,n−1})c†],
 * m_d = d!·Tr X_{00d}(∞). Since every leg must still be closed, l + r + n ≤ K serves all moments up to m_K, with about two
 * thirds of the operators that the moments of the filter's own field would need.
 */

/** Numbers per block in all arrays: s, r, b, t as (re, im) with X_gx = (s + ir)/2, X_xg = (s − ir)/2, X_xx = b/2 and t the trace. */
export const STRIDE = 8;

/** Which block feeds which: offsets into the arrays (0 is a block that stays empty), blocks ordered by n. */
export interface Legs {
  readonly order: number;
  /** Length of the arrays. */
  readonly size: number;
  /** Blocks with l > r, then those with l = r, which stay Hermitian and hold no imaginary parts. */
  readonly complex: Family;
  readonly hermitian: Family;
  /** Offset of X_{lrn} with l ≥ r, or 0. */
  at(l: number, r: number, n: number): number;
}

export interface Family {
  readonly count: number;
  readonly offset: Int32Array;
  /** Open legs l + r. */
  readonly legs: Int32Array;
  /** Sources of an event on the left: one that opens a leg and one that closes a right leg, with the weight r + 1 of the latter. */
  readonly leftOpen: Int32Array;
  readonly leftClose: Int32Array;
  readonly leftWeight: Float64Array;
  /** The same on the right, with weight l + 1. */
  readonly rightOpen: Int32Array;
  readonly rightClose: Int32Array;
  readonly rightWeight: Float64Array;
  /** The block with one pair less. */
  readonly before: Int32Array;
}

interface Place {
  readonly l: number;
  readonly r: number;
  readonly n: number;
}

const known = new Map<number, Legs>();

/** The blocks for factorial moments up to `order`. */
export function legsFor(order: number): Legs {
  const found = known.get(order);
  if (found) return found;
  const made = build(order);
  known.set(order, made);
  return made;
}

function build(order: number): Legs {
  const complex: Place[] = [];
  const hermitian: Place[] = [];
  for (let n = 0; n <= order; n++) {
    for (let l = 0; l + n <= order; l++) {
      for (let r = 0; r <= l && l + r + n <= order; r++) (l > r ? complex : hermitian).push({ l, r, n });
    }
  }
  const offsets = new Map([...complex, ...hermitian].map((p, i) => [key(p.l, p.r, p.n), STRIDE * (i + 1)]));
  const at = (l: number, r: number, n: number): number => offsets.get(key(l, r, n)) ?? 0;
  return {
    order,
    size: STRIDE * (offsets.size + 1),
    complex: family(complex, at),
    hermitian: family(hermitian, at),
    at,
  };
}

const key = (l: number, r: number, n: number): string => `${l},${r},${n}`;

/**
 * Left sources of a block with l = r have l < r and are not stored; what they would give follows from the right ones. All
 * other sources are stored.
 */
function family(places: readonly Place[], at: Legs['at']): Family {
  const ints = (of: (p: Place) => number): Int32Array => Int32Array.from(places, of);
  const left = ({ l, r }: Place): boolean => l > r;
  return {
    count: places.length,
    offset: ints(({ l, r, n }) => at(l, r, n)),
    legs: ints(({ l, r }) => l + r),
    leftOpen: ints((p) => (left(p) ? at(p.l - 1, p.r, p.n) : 0)),
    leftClose: ints((p) => (left(p) ? at(p.l, p.r + 1, p.n - 1) : 0)),
    leftWeight: Float64Array.from(places, ({ r }) => r + 1),
    rightOpen: ints(({ l, r, n }) => at(l, r - 1, n)),
    rightClose: ints(({ l, r, n }) => at(l + 1, r, n - 1)),
    rightWeight: Float64Array.from(places, ({ l }) => l + 1),
    before: ints(({ l, r, n }) => at(l, r, n - 1)),
  };
}
