import { type Count, momentWeights, poissonWeights } from '../collection/moments.js';
import type { PulseFigures } from '../figures.js';
import type { Reading } from './count.js';
import type { Scalar, Terms } from './formula.js';

/** First-order change of a scalar at one drift node. */
export interface Functional {
  /** By what the kernel counts, by target name. */
  readonly counted: Record<string, number>;
  /** By the leaked photons. */
  leakage: number;
  /** By the figures of the pulse. */
  readonly pulse: Partial<Record<keyof PulseFigures, number>>;
}

const EMITTED: Readonly<Record<string, string>> = {
  mean: 'mean',
  factorial2: 'factorial2',
  'p.0': 'p0',
  'p.1': 'p1',
  'p.2': 'p2',
  'p.3': 'p3',
  multiphoton: 'multiphoton',
};

/** The change of Σ coefficient · scalar. */
export function functionalOf(terms: Terms, reading: Reading): Functional {
  const out: Functional = { counted: {}, leakage: 0, pulse: {} };
  for (const [scalar, coefficient] of terms) addScalar(out, scalar, coefficient, reading);
  return out;
}

function add<K extends string>(into: Partial<Record<K, number>>, key: K, weight: number): void {
  if (weight !== 0) into[key] = (into[key] ?? 0) + weight;
}

function addScalar(out: Functional, scalar: Scalar, weight: number, reading: Reading): void {
  const dot = scalar.indexOf('.');
  const [basis, name] = dot < 0 ? [scalar, ''] : [scalar.slice(0, dot), scalar.slice(dot + 1)];
  switch (basis) {
    case 'emitted':
      add(out.counted, EMITTED[name], weight);
      break;
    case 'filtered':
      addMoments(out, name.replace('.', ''), weight, 1, reading.order as number);
      break;
    case 'signal':
      addSignal(out, name as keyof Count, weight, reading);
      break;
    case 'collected': {
      const { count, extra } = poissonWeights(name as keyof Count, reading.signal as Count, reading.leakage);
      for (const [key, share] of Object.entries(count))
        addSignal(out, key as keyof Count, weight * share, reading);
      out.leakage += weight * extra;
      break;
    }
    case 'leakage':
      out.leakage += weight;
      break;
    case 'pulse':
      add(out.pulse, name as keyof PulseFigures, weight);
      break;
    default:
      throw new Error(`no derivative is known for ${scalar}`);
  }
}

function addMoments(out: Functional, name: string, weight: number, eta: number, order: number): void {
  if (name === 'mean') add(out.counted, 'm1', weight * eta);
  else if (name === 'factorial2') add(out.counted, 'm2', weight * eta * eta);
  else {
    const weights = momentWeights(order, eta)[name as 'p0' | 'p1' | 'multiphoton'];
    weights.forEach((share, k) => {
      add(out.counted, `m${k + 1}`, weight * share);
    });
  }
}

/** Targets of the emitted count, whole and after losses. */
const WHOLE = { p0: 'p0', single: 'p1', multiphoton: 'multiphoton' } as const;
const THINNED = { p0: 'thinned0', single: 'thinned1', multiphoton: 'thinnedMultiphoton' } as const;

function addSignal(out: Functional, key: keyof Count, weight: number, { eta, order }: Reading): void {
  if (order !== null) addMoments(out, key === 'single' ? 'p1' : key, weight, eta, order);
  else if (key === 'mean') add(out.counted, 'mean', weight * eta);
  else if (key === 'factorial2') add(out.counted, 'factorial2', weight * eta * eta);
  else add(out.counted, (eta === 1 ? WHOLE : THINNED)[key], weight);
}
