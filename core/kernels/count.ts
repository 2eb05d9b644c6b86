import type { SeriesRule } from '../collection/moments.js';
import { addEmittedCounting, addThinnedCounting } from '../counting/emitted.js';
import { addFilteredMoments, type RotatingFilter } from '../counting/filtered.js';
import { type Hierarchy, HierarchyBuilder } from '../counting/hierarchy.js';
import { tailEffects } from '../counting/tail.js';
import type { Scheme } from '../emitter/contract.js';
import { buildGenerator, type Generator } from '../emitter/generator.js';
import type { Operator } from '../emitter/operators.js';
import type { Drive } from '../pulse/drive.js';
import { fastKernels } from './fast/registry.js';
import { LinearSystem } from './linear-system.js';
import { buildMesh, type Mesh, propagate, refineMesh } from './mesh.js';

export interface CountRequest {
  readonly scheme: Scheme;
  readonly dipoles: readonly Operator[];
  /** In its own frame; `frame` below is the same rotation relative to the nominal mean exciton line, 1/ps. */
  readonly drive: Drive;
  readonly frame: number;
  /** How far the emitter lies above nominal, 1/ps. */
  readonly shift: number;
  /** Survival probability of the signal for which the thinned count is wanted; null for none. */
  readonly thinning: number | null;
  /** Filter in the rotating frame and the number of factorial moments; null for none. */
  readonly filter: (RotatingFilter & { readonly order: number }) | null;
  readonly effort: Effort;
  /** Figures asked for, by target name; all when left out. A kernel may leave others out of its answer. */
  readonly wanted?: readonly string[];
}

/** How hard the propagator tries. */
export interface Effort {
  /** Local error of the density operator per step. */
  readonly tolerance: number;
  /** Every step of the mesh is cut into this many. */
  readonly parts: number;
  /** Multiplies the number of drift nodes. */
  readonly nodes: number;
  /** How the number of filtered moments is judged. */
  readonly series: SeriesRule;
  /** The steps were compared with finer ones elsewhere: their own error estimate says nothing new. */
  readonly checked?: boolean;
  /** `reference` leaves the fast kernels out, for a check that shares no code with them; `any` when left out. */
  readonly kernel?: 'any' | 'reference';
  /** Size that settled the exact phonon method for the same design without drift; it is not judged again. */
  readonly tower?: { readonly terms: number; readonly depth: number; readonly error: number } | undefined;
}

export interface CountResult {
  /** Figures by target name (emitted.ts, filtered.ts). */
  readonly values: Readonly<Record<string, number>>;
  /** Populations at the end of the drive window, in level order. */
  readonly populations: readonly number[];
  readonly steps: number;
  /** Sum of local errors of the density operator. */
  readonly localErrors: number;
}

const MOST_STEPS = 4_000_000;

/** Error of a propagation that cannot be carried out; the message says why and what helps. */
export class PropagationError extends Error {
  override readonly name = 'PropagationError';
}

/** Counts photons of one design without drift: by the first fast kernel that reaches the accuracy, else by the reference. */
export function countPhotons(request: CountRequest): CountResult {
  if (request.effort.kernel === 'reference') return countByReference(request);
  for (const kernel of fastKernels) {
    const result = kernel.supports(request) ? kernel.count(request, countPhotons) : null;
    if (result) return result;
  }
  return countByReference(request);
}

/** The reference: integrates the drive window with the adaptive Runge–Kutta propagator, then closes with the tail. */
export function countByReference(request: CountRequest): CountResult {
  const { scheme, drive, effort } = request;
  const generator = buildGenerator(scheme, request.frame, request.shift);
  const hierarchy = buildHierarchy(request);
  const system = new LinearSystem(generator, hierarchy);
  const mesh = meshFor(generator, drive, system.fastest, effort);
  const state = propagate(system, drive, effort.parts > 1 ? refineMesh(mesh, effort.parts) : mesh);
  const effects = tailEffects(generator, hierarchy);
  const values: Record<string, number> = {};
  effects.names.forEach((name, i) => {
    values[name] = dot(effects.rows[i], state);
  });
  return {
    values,
    populations: scheme.levels.map((_, i) => state[i * system.lanes]),
    steps: mesh.segments.length * effort.parts,
    localErrors: mesh.localErrors,
  };
}

function buildHierarchy(request: CountRequest): Hierarchy {
  const builder = new HierarchyBuilder();
  addEmittedCounting(builder, request.dipoles);
  if (request.thinning !== null) addThinnedCounting(builder, request.dipoles, request.thinning);
  if (request.filter) addFilteredMoments(builder, request.dipoles, request.filter, request.filter.order);
  return builder.build();
}

/**
 * Damped blocks follow their sources adiabatically, so they ask for stability rather than accuracy: h·|λ| up to here
 * (the method is stable to about 6) left every moment within 1e-9 of a six times finer mesh on all cases tried. λ is that of
 * a block with its levels and the drive: steps that suit the density operator alone, which stands still before the pulse,
 * let a coherence behind the filter grow without bound.
 */
export const STABLE_PHASE = 4.5;

/** A mesh by step-size control on the density operator alone. */
export function meshFor(generator: Generator, drive: Drive, fastest: number, effort: Effort): Mesh {
  const rho = new LinearSystem(generator, new HierarchyBuilder().build());
  const outcome = buildMesh(rho, drive, {
    tolerance: effort.tolerance,
    largestStep: fastest > 0 ? STABLE_PHASE / (fastest + drive.scales.peakRabi) : Number.POSITIVE_INFINITY,
    mostSteps: MOST_STEPS,
  });
  if (outcome.kind === 'failed') {
    throw new PropagationError(
      `${outcome.reason}; a shorter pulse, less dispersion or a smaller detuning helps`,
    );
  }
  return outcome.mesh;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}
