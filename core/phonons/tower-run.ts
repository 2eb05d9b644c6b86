import { type Effort, PropagationError } from '../kernels/count.js';
import type { LinearFlow } from '../kernels/linear-system.js';
import { type Mesh, propagate } from '../kernels/mesh.js';
import type { Drive } from '../pulse/drive.js';
import {
  exponentialFlow,
  exponentialMesh,
  propagateExponentially,
  STABLE_PHASE,
} from './exponential-step.js';
import type { TowerSystem } from './tower-system.js';

/** Local error per step that the drive alone may cause: far below what depth and terms leave. */
const TOLERANCE = 1e-7;
/** Step times fastest decay at which the Runge–Kutta propagator is still stable; its region reaches to about 6.5. */
const STABLE_STEP = 6;
/** Work of a Runge–Kutta step over that of an exponential one: twelve stages with their sums against eight terms. */
const WORK_RATIO = 3;

export interface TowerRun {
  /** At the end of the drive. */
  readonly state: Float64Array;
  readonly steps: number;
  readonly localErrors: number;
}

/**
 * Runs a hierarchy along a drive: by exponential steps where the bath's own decay sets their length, by the propagator of
 * order 8 where a fast drive does, or where it is asked for as an independent check.
 * @param bare ρ without a bath: chooses the exponential steps, which the bath bounds besides
 * @param base a mesh fine enough for the drive
 * @param fastest bound of the decay and rotation of a storey, 1/ps
 */
export function runTower(
  system: TowerSystem,
  bare: LinearFlow,
  drive: Drive,
  base: Mesh,
  fastest: number,
  kernel: Effort['kernel'],
): TowerRun {
  // A state that grows, as a density operator never does, asks for shorter steps than the bound of the decay tells.
  for (let slack = 1; slack < 10; slack *= 1.5) {
    const plain = shortenSteps(base, STABLE_STEP / fastest / slack);
    const mostSteps = WORK_RATIO * plain.segments.length;
    const largestStep = (2 * STABLE_PHASE) / fastest / slack;
    const options = { tolerance: TOLERANCE, largestStep, mostSteps };
    const mesh = kernel === 'reference' ? null : exponentialMesh(exponentialFlow(bare), drive, options);
    const state = mesh ? propagateExponentially(system, drive, mesh) : propagate(system, drive, plain);
    if (isSound(system, state)) {
      const used = mesh ?? plain;
      return { state, steps: used.segments.length, localErrors: base.localErrors };
    }
  }
  throw new PropagationError(
    'the phonon hierarchy grows without bound: its depth does not suffice for so strong a coupling or so high a temperature; a second-order phonon method helps',
  );
}

function isSound(system: TowerSystem, state: Float64Array): boolean {
  let trace = 0;
  let largest = 0;
  for (let i = 0; i < Math.sqrt(system.size); i++) {
    const p = state[system.root(i, 0)];
    trace += p;
    largest = Math.max(largest, Math.abs(p));
  }
  return Math.abs(trace - 1) < 1e-6 && largest < 1.5;
}

function shortenSteps(mesh: Mesh, longest: number): Mesh {
  const times: number[] = [mesh.times[0]];
  const segments: number[] = [];
  for (let k = 0; k < mesh.segments.length; k++) {
    const a = mesh.times[k];
    const b = mesh.times[k + 1];
    const pieces = Math.max(1, Math.ceil((b - a) / longest));
    for (let p = 1; p <= pieces; p++) {
      times.push(p === pieces ? b : a + ((b - a) * p) / pieces);
      segments.push(mesh.segments[k]);
    }
  }
  return { ...mesh, times: Float64Array.from(times), segments: Int32Array.from(segments) };
}
