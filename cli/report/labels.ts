/** Basis of a figure in words. */
const BASES: Readonly<Record<string, string>> = {
  emitted: 'emitted',
  filtered: 'behind the filter',
  signal: 'signal',
  collected: 'collected',
};

const SYMBOLS: Readonly<Record<string, string>> = {
  mean: '⟨n⟩',
  factorial2: '⟨n(n−1)⟩',
  g2: 'g⁽²⁾[0]',
  single: 'P(n=1)',
  any: 'P(n≥1)',
  multiphoton: 'P(n≥2)',
  leakage: 'laser photons per pulse',
};

const OTHERS: Readonly<Record<string, string>> = {
  'pulse.energy_pi_units': 'pulse energy (π-pulse energies)',
  'pulse.duration_ps': 'pulse duration (ps)',
  'pulse.bandwidth_ghz': 'pulse bandwidth (GHz)',
  'pulse.energy_fj': 'pulse energy (fJ)',
  'pulse.peak_rabi_per_ps': 'peak Rabi frequency (1/ps)',
  'accuracy.steps': 'steps',
  'accuracy.error_estimate': 'estimated error',
};

/** Symbol of a figure without its basis. */
export function symbolOf(name: string): string {
  const count = /^p\.(\d)$/.exec(name);
  return count ? `P(n=${count[1]})` : (SYMBOLS[name] ?? name);
}

/** Title of a figure for axes and headings: symbol and basis, or unit. */
export function figureLabel(path: string): string {
  if (path.startsWith('nominal.')) return `${figureLabel(path.slice('nominal.'.length))}, without drift`;
  if (path.startsWith('quantile.'))
    return `${figureLabel(path.slice('quantile.'.length))}, quantile of the drift`;
  if (OTHERS[path] !== undefined) return OTHERS[path];
  const [head, ...rest] = path.split('.');
  if (head === 'populations') return `population of ${rest.join('.')} after the pulse`;
  return `${symbolOf(rest.join('.'))}, ${BASES[head] ?? head}`;
}
