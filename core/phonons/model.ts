import type { Scheme } from '../emitter/contract.js';
import { driveOperators } from '../emitter/generator.js';
import type { ComplexMatrix } from './complex-matrix.js';
import type { ExponentialFit } from './fit.js';

/**
 * One bath of a second-order method: dρ/dt gains −[X(t), Qρ − ρQ†] with Q(t) = ∫ f(s) U X(t−s) U† ds and the correlation
 * f given by its fit.
 */
export interface CoupledBath {
  readonly fit: ExponentialFit;
  /** Writes X for the (scaled) drive values at that time, 1/ps. */
  operator(drive: Float64Array, out: ComplexMatrix): void;
}

/** What a second-order method makes of an emitter in a bath. */
export interface SecondOrderModel {
  /** Levels as the equations of motion need them: relaxation energy included or not. */
  readonly scheme: Scheme;
  /** The drive is multiplied by this. */
  readonly driveFactor: number;
  readonly baths: readonly CoupledBath[];
  /** Time after the drive during which the emitter still feels it through the bath, ps. */
  readonly afterglow: number;
  /** Error of figures, in the measure of the error estimate, per error of the bath's fit; measured at 4 K. */
  readonly fitSensitivity: number;
}

/** H/ħ in the rotating frame as a function of the drive values. */
export class Hamiltonian {
  readonly levels: number;
  private readonly bare: Float64Array;
  private readonly raising: readonly { upper: number; lower: number; component: number; weight: number }[];

  constructor(scheme: Scheme, frame: number, shift: number) {
    const n = scheme.levels.length;
    this.levels = n;
    this.bare = Float64Array.from(scheme.levels, (l) => l.offset - l.excitons * (frame - shift));
    this.raising = raisingEntries(scheme);
  }

  /** Highest transition frequency without drive, 1/ps. */
  get spread(): number {
    return Math.max(...this.bare) - Math.min(...this.bare);
  }

  at(drive: Float64Array, out: ComplexMatrix): void {
    const n = this.levels;
    out.fill(0);
    for (let i = 0; i < n; i++) out[2 * (i * n + i)] = this.bare[i];
    addDrive(n, this.raising, drive, 0.5, 0, out);
  }
}

export interface RaisingEntry {
  readonly upper: number;
  readonly lower: number;
  readonly component: number;
  readonly weight: number;
}

export function raisingEntries(scheme: Scheme): RaisingEntry[] {
  const n = scheme.levels.length;
  return driveOperators(scheme).flatMap((a, component) => {
    const entries: RaisingEntry[] = [];
    for (let upper = 0; upper < n; upper++) {
      for (let lower = 0; lower < n; lower++) {
        const weight = a.re[upper * n + lower];
        if (weight !== 0) entries.push({ upper, lower, component, weight });
      }
    }
    return entries;
  });
}

/** out += z Σ_c Ω_c A_c + h.c. with z = re + i im. */
export function addDrive(
  n: number,
  entries: readonly RaisingEntry[],
  drive: Float64Array,
  re: number,
  im: number,
  out: ComplexMatrix,
): void {
  for (const { upper, lower, component, weight } of entries) {
    const x = weight * (re * drive[2 * component] - im * drive[2 * component + 1]);
    const y = weight * (re * drive[2 * component + 1] + im * drive[2 * component]);
    out[2 * (upper * n + lower)] += x;
    out[2 * (upper * n + lower) + 1] += y;
    out[2 * (lower * n + upper)] += x;
    out[2 * (lower * n + upper) + 1] -= y;
  }
}
