import type { LinearFlow } from '../kernels/linear-system.js';
import type { Mesh } from '../kernels/mesh.js';
import type { SampledDrive } from '../kernels/step.js';

/** A linear right-hand side M(drive)y that can be applied again and again for one set of drive values. */
export interface ExponentialFlow extends LinearFlow {
  /** A vector of zeros for use in `addTerm`. */
  vector(): Float64Array;
  /** Takes drive values, 1/ps, for the terms that follow. */
  setDrive(drive: Float64Array): void;
  /** term = factor·M y; sum += term. */
  addTerm(y: Float64Array, term: Float64Array, factor: number, sum: Float64Array): void;
}

/** Any linear flow as one that keeps its drive values; for small systems. */
export function exponentialFlow(flow: LinearFlow): ExponentialFlow {
  let values = new Float64Array(0);
  return {
    length: flow.length,
    initial: () => flow.initial(),
    derivative: (drive, y, dy) => flow.derivative(drive, y, dy),
    vector: () => new Float64Array(flow.length),
    setDrive(drive) {
      values = drive.slice();
    },
    addTerm(y, term, factor, sum) {
      flow.derivative(values, y, term);
      for (let k = 0; k < term.length; k++) {
        term[k] *= factor;
        sum[k] += term[k];
      }
    },
  };
}

/**
 * Terms of the exponential's Taylor series. Per application of M four are the most stable: on the left half of a disc
 * about 2.6 wide. Modes that decay at a constant rate are left exactly as slow as they are by any such polynomial.
 */
const TERMS = 4;
/** Largest |λ|h of a half step. */
export const STABLE_PHASE = 2.6;
/** Gauss nodes of a step, and what each half of the step takes of the drive at the first and at the second. */
const NODES = [0.5 - Math.sqrt(3) / 6, 0.5 + Math.sqrt(3) / 6] as const;
const NEAR = 0.5 + Math.sqrt(3) / 3;
const FAR = 0.5 - Math.sqrt(3) / 3;

/**
 * Commutator-free exponential integrator of order 4 (Blanes & Moan, Appl. Numer. Math. 56, 1519 (2006)): two exponentials
 * of weighted means of M per step. Needs three work vectors instead of a dozen stages.
 */
export class ExponentialStepper {
  private readonly first: Float64Array;
  private readonly second: Float64Array;
  private readonly mean: Float64Array;
  private readonly even: Float64Array;
  private readonly odd: Float64Array;

  constructor(
    private readonly flow: ExponentialFlow,
    private readonly drive: SampledDrive,
  ) {
    this.first = new Float64Array(2 * drive.components);
    this.second = new Float64Array(2 * drive.components);
    this.mean = new Float64Array(2 * drive.components);
    this.even = flow.vector();
    this.odd = flow.vector();
  }

  /** Advances y from t by h in place. */
  advance(t: number, h: number, segment: number, y: Float64Array): void {
    this.drive.sample(t + NODES[0] * h, segment, this.first);
    this.drive.sample(t + NODES[1] * h, segment, this.second);
    this.half(NEAR, FAR, h / 2, y);
    this.half(FAR, NEAR, h / 2, y);
  }

  private half(a: number, b: number, h: number, y: Float64Array): void {
    const { flow, first, second, mean, even, odd } = this;
    for (let c = 0; c < mean.length; c++) mean[c] = a * first[c] + b * second[c];
    flow.setDrive(mean);
    // The first term is made from y itself, which must not change meanwhile.
    odd.set(y);
    let from = odd;
    let to = even;
    for (let k = 1; k <= TERMS; k++) {
      flow.addTerm(from, to, h / k, y);
      [from, to] = [to, from];
    }
  }
}

export interface ExponentialMeshOptions {
  /** Local error per step, of the largest coordinate. */
  readonly tolerance: number;
  readonly largestStep: number;
  readonly mostSteps: number;
}

const SAFETY = 0.9;
const SHRINK = 0.3;
const GROW = 2;

/**
 * Steps for `ExponentialStepper`, chosen on a smaller system by comparing each step with two halves. Null when it would
 * take more than `mostSteps`.
 */
export function exponentialMesh(
  flow: ExponentialFlow,
  drive: SampledDrive,
  { tolerance, largestStep, mostSteps }: ExponentialMeshOptions,
): Mesh | null {
  const stepper = new ExponentialStepper(flow, drive);
  const { breakpoints, scales } = drive;
  const times: number[] = [breakpoints[0]];
  const segments: number[] = [];
  const y = flow.initial();
  const coarse = flow.vector();
  const fine = flow.vector();
  let h = Math.min(largestStep, 0.2 * scales.time);
  let localErrors = 0;
  for (let segment = 0; segment + 1 < breakpoints.length; segment++) {
    const end = breakpoints[segment + 1];
    let t = breakpoints[segment];
    while (t < end) {
      const last = h >= (end - t) * (1 - 1e-12);
      const step = last ? end - t : Math.min(h, 0.5 * (end - t));
      coarse.set(y);
      stepper.advance(t, step, segment, coarse);
      fine.set(y);
      stepper.advance(t, step / 2, segment, fine);
      stepper.advance(t + step / 2, step / 2, segment, fine);
      const error = largestDifference(coarse, fine);
      if (!Number.isFinite(error)) return null;
      const factor = Math.min(GROW, Math.max(SHRINK, SAFETY * (error / tolerance) ** -0.2));
      if (error <= tolerance) {
        t = last ? end : t + step;
        times.push(t);
        segments.push(segment);
        if (segments.length > mostSteps) return null;
        y.set(fine);
        localErrors += error;
        h = Math.min(largestStep, Math.max(h, step) * Math.max(factor, last ? 1 : 0));
      } else {
        h = step * Math.min(factor, 0.9);
      }
    }
  }
  return { times: Float64Array.from(times), segments: Int32Array.from(segments), localErrors };
}

function largestDifference(a: Float64Array, b: Float64Array): number {
  let worst = 0;
  for (let i = 0; i < a.length; i++) worst = Math.max(worst, Math.abs(a[i] - b[i]));
  return worst;
}

/** Runs a system over a mesh and returns the state at the end of the drive. */
export function propagateExponentially(flow: ExponentialFlow, drive: SampledDrive, mesh: Mesh): Float64Array {
  const y = flow.initial();
  const stepper = new ExponentialStepper(flow, drive);
  const { times, segments } = mesh;
  for (let k = 0; k < segments.length; k++) {
    stepper.advance(times[k], times[k + 1] - times[k], segments[k], y);
  }
  return y;
}
