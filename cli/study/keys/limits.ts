import type { Dimension } from '../../../core/index.js';
import { type Leaf, optionalQuantity, optionalSection, type Section, section } from './kinds.js';

type LimitKeys = { readonly at_most: Leaf<number | null>; readonly at_least: Leaf<number | null> };
type LimitSection = Section<LimitKeys, true>;

function limit(dimension: Dimension, help: string): LimitSection {
  const bounds = { bounds: { from: 0 } };
  return optionalSection(help, {
    at_most: optionalQuantity(dimension, 'upper bound', bounds),
    at_least: optionalQuantity(dimension, 'lower bound', bounds),
  });
}

const COUNTS = {
  mean: 'mean number of photons',
  single: 'P(n=1)',
  any: 'P(n≥1)',
  multiphoton: 'P(n≥2)',
  g2: 'g⁽²⁾[0]',
} as const;

const counts = (basis: string, where: string, names: readonly (keyof typeof COUNTS)[]) =>
  names.map((name) => [`${basis}.${name}`, limit('fraction', `${COUNTS[name]} ${where}`)] as const);

/** Every figure that can be bounded, by its path in the figures; its unit is that of the figure. */
const bounded: Readonly<Record<string, LimitSection>> = Object.fromEntries([
  ['pulse.energy_pi_units', limit('fraction', 'pulse energy, over that of a π pulse of the first width')],
  ['pulse.energy_fj', limit('pulseEnergy', 'pulse energy; needs laser.pi_pulse')],
  ['pulse.peak_rabi_per_ps', limit('rabi', 'largest Rabi frequency Ω of the pulse (angular)')],
  ['pulse.duration_ps', limit('time', 'duration between the outermost half maxima')],
  ['pulse.bandwidth_ghz', limit('frequency', 'bandwidth between the outermost half maxima')],
  ['collected.leakage', limit('fraction', 'leaked laser photons per pulse')],
  ...counts('collected', 'of what is collected', ['mean', 'single', 'any', 'multiphoton', 'g2']),
  ...counts('signal', 'of the signal', ['mean', 'single', 'any', 'multiphoton', 'g2']),
  ...counts('filtered', 'behind the filter', ['mean', 'multiphoton', 'g2']),
  ...counts('emitted', 'emitted', ['mean', 'multiphoton', 'g2']),
]);

export const limits = section('bounds that every design must keep; means over drift', 'empty', bounded);
