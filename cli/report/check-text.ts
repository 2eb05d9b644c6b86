import { formatQuantity, GHZ_PER_MEV } from '../../core/index.js';
import type { Study } from '../study/index.js';
import type { DesignFacts, ToneFacts } from './derived.js';
import { goalLines } from './goal-text.js';
import { lineText } from './lines.js';
import { threeDigits } from './numbers.js';
import { choiceReasons, PHONON_ROWS } from './phonon-facts.js';
import { bold, tableText } from './table.js';

/** Facts of a study: of its one design, or at both ends of its free parameters. */
export interface Corner {
  /** Heading of the column. */
  readonly name: string;
  readonly facts: DesignFacts;
}

type Row = readonly [label: string, value: (facts: DesignFacts) => string];

const withUnit = (value: number | null, unit: string): string =>
  value === null ? '–' : `${threeDigits(value)} ${unit}`;

/** A wavelength or photon energy: three digits would hide every detuning. */
const fine = (value: number, digits: number, unit: string): string => `${value.toFixed(digits)} ${unit}`;

const signed = (value: number): string => (value > 0 ? `+${threeDigits(value)}` : threeDigits(value));

function toneRows(index: number, lines: readonly string[]): Row[] {
  const of = (text: (tone: ToneFacts) => string) => (facts: DesignFacts) => text(facts.tones[index]);
  return [
    ['width (FWHM, transform-limited)', of((t) => withUnit(t.fwhm_ps, 'ps'))],
    ['bandwidth (FWHM)', of((t) => withUnit(t.bandwidth_ghz, 'GHz'))],
    ['time–bandwidth product', of((t) => threeDigits(t.time_bandwidth_product))],
    ['duration after dispersion (FWHM)', of((t) => withUnit(t.duration_ps, 'ps'))],
    ['energy, π pulse of this width = 1', of((t) => threeDigits(t.energy_pi_units))],
    ['energy', of((t) => withUnit(t.energy_fj, 'fJ'))],
    ['peak Rabi frequency Ω', of((t) => withUnit(t.peak_rabi_per_ps, '1/ps'))],
    ['peak Rabi energy ħΩ', of((t) => withUnit(t.peak_rabi_mev, 'meV'))],
    ['centre', of((t) => fine(t.wavelength_nm, 4, 'nm'))],
    ...lines.map(
      (line): Row => [
        `centre above the ${lineText(line)}`,
        of((t) => `${signed(t.above_line_mev[line])} meV`),
      ],
    ),
  ];
}

const WHOLE: readonly Row[] = [
  ['energy, π pulse of the first width = 1', (f) => threeDigits(f.pulse.energy_pi_units)],
  ['energy', (f) => withUnit(f.pulse.energy_fj, 'fJ')],
  ['duration (outermost half maxima)', (f) => withUnit(f.pulse.duration_ps, 'ps')],
  ['bandwidth (outermost half maxima)', (f) => withUnit(f.pulse.bandwidth_ghz, 'GHz')],
];

const EMITTER: readonly Row[] = [
  ['exciton photon energy', (f) => fine(f.emitter.exciton_energy_mev, 3, 'meV')],
  ['exciton linewidth', (f) => withUnit(f.emitter.linewidth_ghz, 'GHz')],
];

const BIAS: Row = [
  'bias to set',
  (f) => (f.emitter.bias_mv === null ? '–' : formatQuantity(f.emitter.bias_mv, 'voltage', 4)),
];

const PROPAGATOR: readonly Row[] = [
  ['drive window from', (f) => withUnit(f.propagator.window_ps[0], 'ps')],
  ['drive window to', (f) => withUnit(f.propagator.window_ps[1], 'ps')],
  ['rotating frame above the exciton line', (f) => `${signed(f.propagator.frame_mev)} meV`],
  ['steps', (f) => (f.propagator.steps === null ? 'cannot be integrated' : String(f.propagator.steps))],
];

/** Tones whose bandwidth reaches a transition that they do not stand at: it is driven along. */
function reachWarnings(corners: readonly Corner[]): string[] {
  return corners.flatMap(({ name, facts }) =>
    facts.tones.flatMap(({ reaches, bandwidth_ghz }, i) =>
      reaches.map(({ line, above_mev }) => {
        const at = corners.length > 1 ? ` (${name})` : '';
        const width = threeDigits(bandwidth_ghz / GHZ_PER_MEV);
        return `  tone ${i}${at}: its bandwidth of ${width} meV reaches the ${lineText(line)}, which lies ${threeDigits(Math.abs(above_mev))} meV from its centre`;
      }),
    ),
  );
}

/** The bath, and why `auto` takes the method that it takes; nothing without phonons. */
function phononParts(
  corners: readonly Corner[],
  section: (title: string, rows: readonly Row[]) => string,
): string[] {
  const known = corners.flatMap(({ facts }) => facts.phonons ?? []);
  if (known.length === 0) return [];
  const rows = PHONON_ROWS.map(
    ([label, value]): Row => [label, (f) => (f.phonons === null ? '–' : value(f.phonons))],
  );
  return [[section('phonons', rows), ...choiceReasons(known).map((reason) => `  ${reason}`)].join('\n')];
}

/** Everything that follows from a study, in sections. */
export function checkText(
  study: Study,
  corners: readonly Corner[],
  parameters: readonly string[],
  color: boolean,
): string {
  const section = (title: string, rows: readonly Row[]) => {
    const body = rows.map(([label, value]) => [`  ${label}`, ...corners.map(({ facts }) => value(facts))]);
    const names = corners.length > 1 ? corners.map((c) => c.name) : [''];
    return tableText({ head: [title, ...names], rows: body }, color);
  };
  const { tones } = corners[0].facts;
  const lines = Object.keys(tones[0].above_line_mev);
  const parts = [
    section(`emitter (${study.design.emitter.model})`, study.tuning === null ? EMITTER : [...EMITTER, BIAS]),
    ...tones.map((tone, i) => section(`tone ${i} (${tone.shape})`, toneRows(i, lines))),
    section('whole pulse', WHOLE),
    ...phononParts(corners, section),
    section('propagator', PROPAGATOR),
  ];
  const warnings = reachWarnings(corners);
  if (warnings.length > 0) parts.push([bold('warnings', color), ...warnings].join('\n'));
  const failures = corners.flatMap(({ facts }) => facts.propagator.failure ?? []);
  if (failures.length > 0) parts.push(failures.join('\n'));
  if (parameters.length > 0)
    parts.push([bold('goal', color), ...goalLines(study.goal).map((line) => `  ${line}`)].join('\n'));
  if (parameters.length > 0) {
    parts.push([bold('free parameters', color), ...parameters.map((text) => `  ${text}`)].join('\n'));
  }
  return parts.join('\n\n');
}
