import type { LinearFlow } from './linear-system.js';
import { type SampledDrive, Stepper } from './step.js';

/** Steps of one drive window: step k goes from times[k] to times[k+1] inside segment segments[k]. */
export interface Mesh {
  readonly times: Float64Array;
  readonly segments: Int32Array;
  /** Sum of the local errors of the density operator over all steps. */
  readonly localErrors: number;
}

export type MeshOutcome =
  | { readonly kind: 'mesh'; readonly mesh: Mesh }
  | { readonly kind: 'failed'; readonly reason: string };

export interface MeshOptions {
  /** Local error per step that the density operator may have. */
  readonly tolerance: number;
  /** Largest step, ps: set by dampings that an explicit method must resolve. */
  readonly largestStep: number;
  readonly mostSteps: number;
}

const SAFETY = 0.9;
const SHRINK = 0.2;
const GROW = 4;

/**
 * Chooses the steps by integrating the density operator alone under step-size control. The whole hierarchy is then run
 * on this fixed mesh, which keeps every lane on the same steps and makes refinement a clean error measure.
 */
export function buildMesh(rho: LinearFlow, drive: SampledDrive, options: MeshOptions): MeshOutcome {
  const stepper = new Stepper(rho, drive);
  const { breakpoints, scales } = drive;
  const times: number[] = [breakpoints[0]];
  const segments: number[] = [];
  const y = rho.initial();
  const next = new Float64Array(rho.length);
  const largest = Math.min(options.largestStep, 2 * scales.time);
  let h = Math.min(largest, 0.05 * scales.time);
  let localErrors = 0;
  for (let segment = 0; segment + 1 < breakpoints.length; segment++) {
    const end = breakpoints[segment + 1];
    let t = breakpoints[segment];
    while (t < end) {
      const remaining = end - t;
      const last = h >= remaining * (1 - 1e-12);
      const step = last ? remaining : Math.min(h, 0.5 * remaining);
      stepper.advance(t, step, segment, y, next);
      const error = stepper.localError(step);
      if (!Number.isFinite(error))
        return { kind: 'failed', reason: 'the propagator met a value that is not finite' };
      const ratio = error / options.tolerance;
      const factor = ratio === 0 ? GROW : Math.min(GROW, Math.max(SHRINK, SAFETY * ratio ** -0.125));
      if (ratio <= 1) {
        t = last ? end : t + step;
        times.push(t);
        segments.push(segment);
        y.set(next);
        localErrors += error;
        if (times.length > options.mostSteps) {
          return { kind: 'failed', reason: `the pulse needs more than ${options.mostSteps} steps` };
        }
        h = Math.min(largest, Math.max(h, step) * (last ? Math.max(1, factor) : factor));
      } else {
        h = step * Math.min(factor, 1);
      }
    }
  }
  return {
    kind: 'mesh',
    mesh: { times: Float64Array.from(times), segments: Int32Array.from(segments), localErrors },
  };
}

/** The mesh with every step cut into `parts` equal ones. */
export function refineMesh(mesh: Mesh, parts: number): Mesh {
  const steps = mesh.segments.length;
  const times = new Float64Array(steps * parts + 1);
  const segments = new Int32Array(steps * parts);
  for (let k = 0; k < steps; k++) {
    const h = (mesh.times[k + 1] - mesh.times[k]) / parts;
    for (let p = 0; p < parts; p++) {
      times[k * parts + p] = mesh.times[k] + p * h;
      segments[k * parts + p] = mesh.segments[k];
    }
  }
  times[steps * parts] = mesh.times[steps];
  return { times, segments, localErrors: mesh.localErrors };
}

/** `count` equal steps per segment: for convergence tests and traces. */
export function uniformMesh(drive: SampledDrive, count: number): Mesh {
  const segments = drive.breakpoints.length - 1;
  const times = new Float64Array(segments * count + 1);
  const owner = new Int32Array(segments * count);
  for (let s = 0; s < segments; s++) {
    const a = drive.breakpoints[s];
    const b = drive.breakpoints[s + 1];
    for (let k = 0; k < count; k++) {
      times[s * count + k] = a + ((b - a) * k) / count;
      owner[s * count + k] = s;
    }
  }
  times[segments * count] = drive.breakpoints[segments];
  return { times, segments: owner, localErrors: Number.NaN };
}

/** Runs a system over a mesh and returns the state at the end of the drive. */
export function propagate(
  system: LinearFlow,
  drive: SampledDrive,
  mesh: Mesh,
  observe?: (t: number, y: Float64Array) => void,
): Float64Array {
  const stepper = new Stepper(system, drive);
  const y = system.initial();
  const { times, segments } = mesh;
  observe?.(times[0], y);
  for (let k = 0; k < segments.length; k++) {
    stepper.advance(times[k], times[k + 1] - times[k], segments[k], y, y);
    observe?.(times[k + 1], y);
  }
  return y;
}
