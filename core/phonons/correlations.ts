import { Memo } from '../kernels/fast/memo.js';
import {
  type Bath,
  type ComplexSeries,
  correlation,
  displacement,
  longestTime,
  relaxationShift,
} from './bath.js';
import { buildPencil, type ExponentialFit, fitExponentials, type Pencil } from './fit.js';

/**
 * The correlation functions that the methods stand on: `bath` is C(t) of the coupling itself; `even` and `odd` are
 * ⟨B⟩²(cosh φ − 1) and ⟨B⟩² sinh φ of the polaron frame.
 */
export type CorrelationKind = 'bath' | 'even' | 'odd';

const SAMPLES = 161;
/** Level, relative to t = 0, below which a correlation no longer has to be fitted. */
const NEGLIGIBLE = 1e-9;

function series(bath: Bath, kind: CorrelationKind, times: Float64Array): ComplexSeries {
  if (kind === 'bath') return correlation(bath, times);
  const phi = displacement(bath, times);
  const phi0 = displacement(bath, new Float64Array(1)).re[0];
  const re = new Float64Array(times.length);
  const im = new Float64Array(times.length);
  for (let i = 0; i < times.length; i++) {
    // ⟨B⟩² = e^{−φ(0)} stays inside the exponents: cosh φ alone overflows for a hot bath.
    const up = Math.exp(phi.re[i] - phi0) / 2;
    const down = Math.exp(-phi.re[i] - phi0) / 2;
    const cos = Math.cos(phi.im[i]);
    const sin = Math.sin(phi.im[i]);
    if (kind === 'even') {
      re[i] = (up + down) * cos - Math.exp(-phi0);
      im[i] = (up - down) * sin;
    } else {
      re[i] = (up - down) * cos;
      im[i] = (up + down) * sin;
    }
  }
  return { re, im };
}

function uniform(end: number, count: number): Float64Array {
  return Float64Array.from({ length: count }, (_, i) => (end * i) / (count - 1));
}

const MOST_ENTRIES = 64;

/** A bath as part of a memo's key. */
export const contentOf = (...parts: readonly (Bath | string | number)[]): string =>
  parts.map((p) => (typeof p === 'object' ? `${p.coupling}|${p.cutoff}|${p.temperature}` : p)).join('|');

const memories = new Memo<number>(MOST_ENTRIES);

/** Time after which a correlation stays below `level` of its start, ps; at most what the integrals resolve. */
export function memoryTime(bath: Bath, kind: CorrelationKind, level: number): number {
  return memories.get(contentOf(kind, level, bath), () => {
    const times = uniform(longestTime(bath), 800);
    const { re, im } = series(bath, kind, times);
    const start = Math.hypot(re[0], im[0]);
    for (let i = times.length - 1; i > 0; i--) {
      if (Math.hypot(re[i], im[i]) > level * start) return times[Math.min(i + 1, times.length - 1)];
    }
    return times[1];
  });
}

const condons = new Memo<number>(MOST_ENTRIES);

/** ⟨B⟩ = e^{−φ(0)/2}; its square is the weight of the zero-phonon line. */
export function frankCondon(bath: Bath): number {
  return condons.get(contentOf(bath), () => Math.exp(-displacement(bath, new Float64Array(1)).re[0] / 2));
}

interface Entry {
  readonly pencil: Pencil;
  readonly fits: Map<number, ExponentialFit>;
}

const entries = new Memo<Entry>(MOST_ENTRIES);

function entryFor(bath: Bath, kind: CorrelationKind): Entry {
  return entries.get(contentOf(kind, bath), () => {
    const reach = Math.max(memoryTime(bath, kind, NEGLIGIBLE), 9 / bath.cutoff);
    const end = Math.min(reach, longestTime(bath) / 1.5);
    const times = uniform(1.5 * end, SAMPLES + (SAMPLES >> 1));
    const used = times.findIndex((t) => t > end);
    return { pencil: buildPencil(times, series(bath, kind, times), used), fits: new Map() };
  });
}

/** Fit of one correlation by so many exponentials (conjugate ones counted apart). */
export function correlationFit(bath: Bath, kind: CorrelationKind, terms: number): ExponentialFit {
  const entry = entryFor(bath, kind);
  const known = entry.fits.get(terms);
  if (known) return known;
  // ∫C dt = −iΔ_p: no dephasing at zero frequency, and the shift that the relaxation energy undoes.
  const integral = kind === 'bath' ? ([0, -relaxationShift(bath)] as const) : null;
  const fit = fitExponentials(entry.pencil, terms, integral);
  entry.fits.set(terms, fit);
  return fit;
}

/** Fewest terms that reach `wanted`, or the best there is up to `most`. */
export function settledFit(bath: Bath, kind: CorrelationKind, wanted: number, most: number): ExponentialFit {
  let best: ExponentialFit | null = null;
  for (let terms = 4; terms <= most; terms++) {
    const fit = correlationFit(bath, kind, terms);
    if (!best || fit.error < best.error) best = fit;
    if (best.error <= wanted) break;
  }
  return best as ExponentialFit;
}
