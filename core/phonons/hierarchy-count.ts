import { HierarchyBuilder } from '../counting/hierarchy.js';
import { tailEffects } from '../counting/tail.js';
import { buildGenerator } from '../emitter/generator.js';
import { type CountRequest, type CountResult, PropagationError } from '../kernels/count.js';
import { buildMesh, propagate, refineMesh } from '../kernels/mesh.js';
import { type Bath, relaxationShift } from './bath.js';
import { correlationFit } from './correlations.js';
import { requestedHierarchy, withRelaxationEnergy } from './counting.js';
import { buildTower } from './tower.js';
import { TowerSystem } from './tower-system.js';
import { filteredTail } from './tower-tail.js';

/** Size of a hierarchy: exponentials of the bath (conjugate ones counted apart) and depth. */
export interface TowerSize {
  readonly terms: number;
  readonly depth: number;
}

export interface TowerCount extends CountResult {
  readonly fitError: number;
  readonly operators: number;
}

/** Local error per step: far below what depth and terms leave. */
const TOLERANCE = 1e-8;
const MOST_STEPS = 400_000;

/** Counts photons with the hierarchical equations of motion at one size. */
export function countWithHierarchy(request: CountRequest, bath: Bath, size: TowerSize): TowerCount {
  const { frame, shift, drive, effort } = request;
  const scheme = withRelaxationEnergy(request.scheme, relaxationShift(bath));
  const fit = correlationFit(bath, 'bath', size.terms);
  const tower = buildTower(fit.poles, size.depth);
  const generator = buildGenerator(scheme, frame, shift);
  const hierarchy = requestedHierarchy(request, { amplitude: 1, sideband: 0 });
  const system = new TowerSystem(generator, hierarchy, scheme, tower);
  const fastest = Math.max(0, ...hierarchy.blocks.map((b) => Math.hypot(b.damping, b.rotation)));
  const outcome = buildMesh(
    new TowerSystem(generator, new HierarchyBuilder().build(), scheme, tower),
    drive,
    {
      tolerance: TOLERANCE,
      largestStep: fastest > 0 ? 1 / fastest : Number.POSITIVE_INFINITY,
      mostSteps: MOST_STEPS,
    },
  );
  if (outcome.kind === 'failed') {
    throw new PropagationError(`${outcome.reason}; a shorter pulse or a second-order phonon method helps`);
  }
  const { mesh } = outcome;
  const state = propagate(system, drive, effort.parts > 1 ? refineMesh(mesh, effort.parts) : mesh);
  const filtered = (name: string): boolean => /^m\d+$/.test(name);
  const values = filteredTail(system, generator, state, filtered);
  const emitted = { ...hierarchy, targets: hierarchy.targets.filter((t) => !filtered(t.name)) };
  const effects = tailEffects(buildGenerator(request.scheme, frame, shift), emitted);
  const run = hierarchy.lanes;
  effects.names.forEach((name, i) => {
    let sum = 0;
    for (let c = 0; c < system.size; c++) {
      for (let lane = 0; lane < run; lane++) sum += effects.rows[i][c * run + lane] * state[system.root(c, lane)];
    }
    values[name] = sum;
  });
  return {
    values,
    populations: scheme.levels.map((_, i) => state[system.root(i, 0)]),
    steps: mesh.segments.length * effort.parts,
    localErrors: mesh.localErrors,
    fitError: fit.error,
    operators: tower.operators,
  };
}
