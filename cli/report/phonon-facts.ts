import {
  type BathFit,
  type Design,
  frankCondon,
  HBAR,
  memoryTime,
  methodFit,
  type PhononSpec,
  phononChoice,
  relaxationShift,
} from '../../core/index.js';
import { threeDigits } from './numbers.js';

/** What follows from the bath of a design. */
export interface PhononFacts {
  /** ⟨B⟩² = e^{−φ(0)}: share of the light in the zero-phonon line; ⟨B⟩ is the factor on the drive. */
  readonly zero_phonon_share: number;
  /** ħΔ_p, meV: by how much the bath lowers the exciton (polaron shift). */
  readonly relaxation_energy_mev: number;
  /** Time after which the bath's correlation stays below 1 % of its start, ps. */
  readonly memory_time_ps: number;
  /** Fits of the bath's correlations by exponentials, by what needs them. */
  readonly fit: { readonly second_order: BathFit; readonly exact: BathFit };
  /** As the study has it. */
  readonly method: PhononSpec['method'];
  /** The second-order method that `auto` takes for this design, and why. */
  readonly auto: { readonly method: 'polaron' | 'weak-coupling'; readonly reason: string };
}

/** Part of its start below which the correlation counts as forgotten. */
const FORGOTTEN = 0.01;

/** Facts of the bath; null without phonons. */
export function phononFacts(design: Design): PhononFacts | null {
  const choice = phononChoice(design);
  const { phonons } = design.emitter;
  if (choice === null || phonons === null) return null;
  const { method } = phonons;
  const secondOrder = method === 'polaron' || method === 'weak-coupling' ? method : choice.method;
  return {
    zero_phonon_share: frankCondon(phonons) ** 2,
    relaxation_energy_mev: HBAR * relaxationShift(phonons),
    memory_time_ps: memoryTime(phonons, 'bath', FORGOTTEN),
    fit: { second_order: methodFit(phonons, secondOrder), exact: methodFit(phonons, 'exact') },
    method,
    auto: { method: choice.method, reason: choice.reason },
  };
}

type Row = readonly [label: string, value: (facts: PhononFacts) => string];

const fitText = ({ terms, error }: BathFit): string => `${error.toExponential(1)} (${terms} terms)`;

/** Rows of the section on phonons. */
export const PHONON_ROWS: readonly Row[] = [
  ['zero-phonon share ⟨B⟩²', (f) => threeDigits(f.zero_phonon_share)],
  ['relaxation energy (polaron shift)', (f) => `${threeDigits(f.relaxation_energy_mev)} meV`],
  ['memory time (to 1 %)', (f) => `${threeDigits(f.memory_time_ps)} ps`],
  ['fit error, second-order method', (f) => fitText(f.fit.second_order)],
  ['fit error, exact method (usual size)', (f) => fitText(f.fit.exact)],
  ['method of the study', (f) => f.method],
  ['method that auto takes', (f) => f.auto.method],
];

/** Why `auto` takes its method, each reason once. */
export function choiceReasons(facts: readonly PhononFacts[]): string[] {
  return [...new Set(facts.map(({ auto }) => auto.reason))];
}
