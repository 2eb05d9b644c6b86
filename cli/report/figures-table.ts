import { type Figures, type FigureTree, formatQuantity, type QuantileFigures } from '../../core/index.js';
import { symbolOf } from './labels.js';
import { threeDigits } from './numbers.js';
import { bold, tableText } from './table.js';

type Basis = 'emitted' | 'filtered' | 'signal' | 'collected';

const BASES: readonly Basis[] = ['emitted', 'filtered', 'signal', 'collected'];
const ROWS = ['mean', 'single', 'any', 'multiphoton', 'g2'] as const;

/** Where the figure of a row stands in a basis; emitted and filtered counts come as p_0, p_1, …. */
function figure(tree: FigureTree, basis: Basis, row: (typeof ROWS)[number]): number | null {
  const node = tree[basis];
  if (node === null) return null;
  if ('p' in node) {
    const { p } = node;
    if (row === 'single') return p === null ? null : p[1];
    if (row === 'any') return p === null || node.multiphoton === null ? null : p[1] + node.multiphoton;
    return node[row];
  }
  return node[row];
}

function countTable(tree: FigureTree, color: boolean): string {
  const bases = BASES.filter((basis) => tree[basis] !== null);
  const rows = ROWS.map((row) => [
    symbolOf(row),
    ...bases.map((basis) => threeDigits(figure(tree, basis, row))),
  ]);
  const dash = bases.map((basis) => (basis === 'collected' ? threeDigits(tree.collected.leakage) : ''));
  rows.push(['laser photons', ...dash]);
  return tableText({ head: ['per pulse', ...bases], rows }, color);
}

function energyText({ energy_fj, energy_pi_units }: FigureTree['pulse']): string {
  const share = `${threeDigits(energy_pi_units)} of a π pulse as wide as the first tone`;
  return energy_fj === null ? share : `${formatQuantity(energy_fj, 'pulseEnergy')} (${share})`;
}

function otherLines(tree: FigureTree): string[] {
  const { pulse, populations, phonons, accuracy } = tree;
  const levels = Object.entries(populations).map(([name, value]) => `${name} ${threeDigits(value)}`);
  const flags = phonons.flags.length > 0 ? ` (${phonons.flags.join('; ')})` : '';
  return [
    `pulse        energy ${energyText(pulse)}, peak Rabi frequency ${threeDigits(pulse.peak_rabi_per_ps)} 1/ps,`,
    `             duration ${threeDigits(pulse.duration_ps)} ps, bandwidth ${threeDigits(pulse.bandwidth_ghz)} GHz`,
    `populations  ${levels.join(', ')} (end of the drive window)`,
    `phonons      ${phonons.method}${flags}`,
    `accuracy     estimated relative error ${accuracy.error_estimate.toExponential(1)}, ${accuracy.steps} steps`,
    ...tree.notes.map((note) => `note         ${note.path}: ${note.reason}`),
  ];
}

/** Brightness and impurity that a share of the drift keeps. */
function quantileLine({ share, signal, collected }: QuantileFigures): string {
  const bright = (['single', 'any', 'mean'] as const).map(
    (n) => `${symbolOf(n)} ≥ ${threeDigits(signal[n])}`,
  );
  const dark = (['multiphoton', 'g2'] as const).map((n) => `${symbolOf(n)} ≤ ${threeDigits(collected[n])}`);
  const held = `held by ${Number((100 * share).toPrecision(3))} % of the drift`;
  return `${held}: signal ${bright.join(', ')}; collected ${dark.join(', ')}`;
}

/**
 * Figures as a physicist reads them: the basis over each column, three significant digits.
 * @param bias bias to set, mV; null without tuning
 */
export function figuresText(title: string, figures: Figures, bias: number | null, color: boolean): string {
  const parts = [bold(title, color), ''];
  if (figures.nominal) parts.push('mean over drift');
  parts.push(countTable(figures, color), '', ...otherLines(figures));
  if (bias !== null)
    parts.push(`bias         ${formatQuantity(bias, 'voltage', 4)} to be set for the first tone's detuning`);
  if (figures.quantile) parts.push('', quantileLine(figures.quantile));
  if (figures.nominal) parts.push('', 'without drift', countTable(figures.nominal, color));
  parts.push(
    '',
    'emitted: every photon of the collected line; filtered: behind the filter; signal: after polariser and',
    'efficiency; collected: signal and leaked laser light.',
  );
  return parts.join('\n');
}
