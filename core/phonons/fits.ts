import type { Bath } from './bath.js';
import { type CorrelationKind, correlationFit, settledFit } from './correlations.js';
import { usualTerms } from './exact.js';
import { FIT_ERROR, MOST_TERMS } from './second-order-count.js';

/** How a method fits the bath by exponentials. */
export interface BathFit {
  /** Exponentials (conjugate ones counted apart); of the larger fit where there are two. */
  readonly terms: number;
  /** Largest error over the start of the correlation. */
  readonly error: number;
}

/** Fits that a method begins with; a quoted exact result may raise the terms. */
export function methodFit(bath: Bath, method: 'polaron' | 'weak-coupling' | 'exact'): BathFit {
  if (method === 'exact') {
    const fit = correlationFit(bath, 'bath', usualTerms(bath));
    return { terms: fit.poles.length, error: fit.error };
  }
  const kinds: readonly CorrelationKind[] = method === 'polaron' ? ['even', 'odd'] : ['bath'];
  const fits = kinds.map((kind) => settledFit(bath, kind, FIT_ERROR, MOST_TERMS));
  return {
    terms: Math.max(...fits.map((fit) => fit.poles.length)),
    error: Math.max(...fits.map((fit) => fit.error)),
  };
}
