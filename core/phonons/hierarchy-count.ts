import { HierarchyBuilder } from '../counting/hierarchy.js';
import { tailEffects } from '../counting/tail.js';
import { buildGenerator, type Generator } from '../emitter/generator.js';
import { type CountRequest, type CountResult, meshFor, PropagationError } from '../kernels/count.js';
import { LinearSystem } from '../kernels/linear-system.js';
import { type Mesh, propagate, uniformMesh } from '../kernels/mesh.js';
import type { Drive } from '../pulse/drive.js';
import { type Bath, relaxationShift } from './bath.js';
import { correlationFit } from './correlations.js';
import { requestedHierarchy, withRelaxationEnergy } from './counting.js';
import { buildTower } from './tower.js';
import { TowerSystem } from './tower-system.js';
import { filteredTail } from './tower-tail.js';
import { trimmed } from './trim.js';

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
/** Step times fastest decay at which the propagator is still stable; its region reaches to about 6.5. */
const STABLE_PHASE = 6;
/** Weight of the lightest auxiliary operator that is kept. */
const LIGHTEST = 3e-4;
/** Area of the pulse's wings that is left out, rad. */
const NEGLIGIBLE_AREA = 1e-6;

/** Counts photons with the hierarchical equations of motion at one size. */
export function countWithHierarchy(request: CountRequest, bath: Bath, size: TowerSize): TowerCount {
  const { frame, shift, effort } = request;
  const drive = trimmed(request.drive, NEGLIGIBLE_AREA);
  const scheme = withRelaxationEnergy(request.scheme, relaxationShift(bath));
  const fit = correlationFit(bath, 'bath', size.terms);
  const excitons = Math.max(...scheme.levels.map((l) => l.excitons));
  const tower = buildTower(fit.poles, size.depth, excitons, LIGHTEST);
  const generator = buildGenerator(scheme, frame, shift);
  const hierarchy = requestedHierarchy(request, { amplitude: 1, sideband: 0 });
  const system = new TowerSystem(generator, hierarchy, scheme, tower);
  const filterRate = Math.max(0, ...hierarchy.blocks.map((b) => Math.hypot(b.damping, b.rotation)));
  const base = meshFor(generator, drive, filterRate, { ...effort, tolerance: TOLERANCE });
  const { mesh, state } = propagateStably(system, drive, base, STABLE_PHASE / (tower.fastest + filterRate));
  const filtered = (name: string): boolean => /^m\d+$/.test(name);
  const values = filteredTail(system, generator, state, filtered);
  const emitted = { ...hierarchy, targets: hierarchy.targets.filter((t) => !filtered(t.name)) };
  const effects = tailEffects(buildGenerator(request.scheme, frame, shift), emitted);
  const run = hierarchy.lanes;
  effects.names.forEach((name, i) => {
    let sum = 0;
    for (let c = 0; c < system.size; c++) {
      for (let lane = 0; lane < run; lane++)
        sum += effects.rows[i][c * run + lane] * state[system.root(c, lane)];
    }
    values[name] = sum;
  });
  return {
    values,
    populations: decayed(system, generator, state, endOf(request.drive) - endOf(drive)),
    steps: mesh.segments.length,
    localErrors: base.localErrors,
    fitError: fit.error,
    operators: tower.operators,
  };
}

const endOf = (drive: Drive): number => drive.breakpoints[drive.breakpoints.length - 1];

/** Populations a time (ps) later without drive: they decay as without a bath. */
function decayed(system: TowerSystem, generator: Generator, state: Float64Array, time: number): number[] {
  const rho = new LinearSystem(generator, new HierarchyBuilder().build());
  const root = Float64Array.from({ length: system.size }, (_, c) => state[system.root(c, 0)]);
  const levels = Array.from({ length: generator.levels }, (_, i) => i);
  if (!(time > 0)) return levels.map((i) => root[i]);
  // Coherences turn fast but feed no population: leave them out, so that a few steps suffice.
  root.fill(0, generator.levels);
  const silent = {
    components: generator.real.length,
    breakpoints: Float64Array.of(0, time),
    scales: { peakRabi: 0, frequency: 0, time },
    sample: (_t: number, _segment: number, out: Float64Array) => out.fill(0),
  };
  const later = propagate(
    { length: rho.length, initial: () => root, derivative: (d, y, dy) => rho.derivative(d, y, dy) },
    silent,
    uniformMesh(silent, 4),
  );
  return levels.map((i) => later[i]);
}

/** Steps no longer than `longest`; shorter ones when the state nevertheless grows, as a density operator never does. */
function propagateStably(
  system: TowerSystem,
  drive: Drive,
  base: Mesh,
  longest: number,
): { mesh: Mesh; state: Float64Array } {
  for (let h = longest; h > longest / 10; h /= 1.5) {
    const mesh = shortenSteps(base, h);
    const state = propagate(system, drive, mesh);
    let trace = 0;
    let largest = 0;
    for (let i = 0; i < Math.sqrt(system.size); i++) {
      const p = state[system.root(i, 0)];
      trace += p;
      largest = Math.max(largest, Math.abs(p));
    }
    if (Math.abs(trace - 1) < 1e-6 && largest < 1.5) return { mesh, state };
  }
  throw new PropagationError(
    'the phonon hierarchy grows without bound: its depth does not suffice for so strong a coupling or so high a temperature; a second-order phonon method helps',
  );
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
