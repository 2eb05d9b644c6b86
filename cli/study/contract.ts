import type { ProblemSpec } from '../../optimizers/index.js';

/** A checked study: complete, readonly, internal units. Nothing downstream applies a default. */
export interface Study extends ProblemSpec {
  readonly title: string;
  /** Null where the line cannot be tuned. The physics does not need it: it says which voltage makes a detuning. */
  readonly tuning: Tuning | null;
}

/** Linear Stark shift of all lines in common: line(V) = line(bias) + slope·(V − bias). */
export interface Tuning {
  /** meV/mV, not 0. */
  readonly slope: number;
  /** Voltage at which the lines are where the study has them, mV; inside the range. */
  readonly bias: number;
  /** Plateau, mV. */
  readonly range: { readonly from: number; readonly to: number };
}

/** A place in a file; lines and columns count from 1, columns in UTF-16 code units. */
export interface Place {
  readonly file: string;
  readonly line: number;
  readonly column: number;
}

/** What is wrong at a place of a study file. */
export interface Fault extends Place {
  /** Path of the key, such as `pulse.tones.0.fwhm`; empty for the file as a whole. */
  readonly path: string;
  readonly found: string;
  readonly wanted: string;
}

/** What its author should know about a valid study. */
export interface Remark extends Place {
  readonly path: string;
  readonly text: string;
}

/** One `--set path=value`; the value is YAML text. */
export interface Override {
  readonly path: string;
  readonly value: string;
}

export type StudyResult =
  | {
      readonly kind: 'study';
      readonly study: Study;
      readonly remarks: readonly Remark[];
      /** SHA-256 (hex) of the normalised study: comments, spacing and the way a value is written do not matter. */
      readonly hash: string;
    }
  | { readonly kind: 'faults'; readonly faults: readonly Fault[] };

/** `study.yaml:7:12 pulse.tones.0.fwhm: got -3 ps; needs more than 0 ps`. */
export function formatFault(fault: Fault): string {
  const path = fault.path === '' ? '' : ` ${fault.path}`;
  return `${fault.file}:${fault.line}:${fault.column}${path}: got ${fault.found}; needs ${fault.wanted}`;
}

/** The same form for a remark. */
export function formatRemark(remark: Remark): string {
  const path = remark.path === '' ? '' : ` ${remark.path}`;
  return `${remark.file}:${remark.line}:${remark.column}${path}: ${remark.text}`;
}
