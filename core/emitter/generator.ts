import type { Scheme } from './contract.js';
import {
  addMatrices,
  addTransfer,
  adjoint,
  combine,
  commutatorMap,
  dissipatorMap,
  type Operator,
  type SparseMatrix,
  zero,
} from './operators.js';

/** L(t) = constant + Σ_c Re Ω_c · real[c] + Im Ω_c · imaginary[c], on coordinate vectors (operators.ts), in 1/ps. */
export interface Generator {
  readonly levels: number;
  readonly constant: SparseMatrix;
  readonly real: readonly SparseMatrix[];
  readonly imaginary: readonly SparseMatrix[];
  /** Coordinates that live wholly on levels that never decay. */
  readonly stable: readonly boolean[];
}

/**
 * The generator of a scheme in a frame.
 * @param frame angular frequency of the rotating frame relative to the nominal mean exciton line, 1/ps
 * @param shift how far the emitter's lines lie above nominal, 1/ps
 */
export function buildGenerator(scheme: Scheme, frame: number, shift: number): Generator {
  const n = scheme.levels.length;
  const bare = zero(n);
  const excitons = zero(n);
  scheme.levels.forEach((level, i) => {
    addTransfer(bare, i, i, level.offset - level.excitons * (frame - shift));
    addTransfer(excitons, i, i, level.excitons);
  });
  const parts = [commutatorMap(bare)];
  for (const c of radiationDipoles(scheme)) parts.push(dissipatorMap(c, 1));
  if (scheme.dephasing > 0) parts.push(dissipatorMap(excitons, scheme.dephasing));
  const raising = driveOperators(scheme);
  return {
    levels: n,
    constant: addMatrices(parts),
    real: raising.map((a) => commutatorMap(combine(a, 0.5, 0, adjoint(a), 0.5, 0))),
    imaginary: raising.map((a) => commutatorMap(combine(a, 0, 0.5, adjoint(a), 0, -0.5))),
    stable: stableCoordinates(scheme),
  };
}

/** The raising operator that each drive component multiplies: H ∋ ½(Ω_c A_c + h.c.). */
export function driveOperators(scheme: Scheme): Operator[] {
  const n = scheme.levels.length;
  const h = zero(n);
  const v = zero(n);
  for (const t of scheme.transitions) {
    addTransfer(h, t.upper, t.lower, t.weightH);
    addTransfer(v, t.upper, t.lower, t.weightV);
  }
  return scheme.projection === 'full' ? [h] : [h, v];
}

function stableCoordinates(scheme: Scheme): boolean[] {
  const n = scheme.levels.length;
  const decays = scheme.levels.map((_, i) => scheme.decays.some((d) => d.from === i && d.rate > 0));
  const stable: boolean[] = decays.map((d) => !d);
  for (let i = 0; i < n; i++) {
    for (let j = i + 1; j < n; j++) {
      const both = !decays[i] && !decays[j];
      stable.push(both, both);
    }
  }
  return stable;
}

/** One dipole per line and polarisation: decays into the same modes are one coherent jump. */
function radiationDipoles(scheme: Scheme): Operator[] {
  const keys = new Set(scheme.decays.map((d) => `${d.line} ${d.polarization}`));
  return [...keys].map((key) => {
    const c = zero(scheme.levels.length);
    for (const d of scheme.decays) {
      if (`${d.line} ${d.polarization}` === key) addTransfer(c, d.to, d.from, Math.sqrt(d.rate));
    }
    return c;
  });
}

/**
 * Collected dipoles: one coherent operator c = Σ √rate |to⟩⟨from| per collected mode of the line.
 * `all` of a linear emitter is two modes; an axis (angle from h, rad) is one: cos β c_h + sin β c_v.
 */
export function collectedDipoles(scheme: Scheme, line: string, axis: number | 'all'): Operator[] {
  const n = scheme.levels.length;
  const dipole = (polarization: 'h' | 'v' | 'any'): Operator => {
    const c = zero(n);
    for (const d of scheme.decays) {
      if (d.line === line && d.polarization === polarization) addTransfer(c, d.to, d.from, Math.sqrt(d.rate));
    }
    return c;
  };
  if (scheme.projection === 'full') return [dipole('any')];
  if (axis === 'all') return [dipole('h'), dipole('v')];
  return [combine(dipole('h'), projection(Math.cos(axis)), 0, dipole('v'), projection(Math.sin(axis)), 0)];
}

/** cos(π/2) is 6e-17 in floating point; an axis along h or v must not mix in the other one at all. */
function projection(x: number): number {
  return Math.abs(x) < 1e-15 ? 0 : x;
}
