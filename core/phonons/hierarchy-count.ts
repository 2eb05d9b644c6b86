import { HierarchyBuilder } from '../counting/hierarchy.js';
import { tailEffects } from '../counting/tail.js';
import { buildGenerator, type Generator } from '../emitter/generator.js';
import { type CountRequest, type CountResult, meshFor } from '../kernels/count.js';
import { Memo } from '../kernels/fast/memo.js';
import { LinearSystem } from '../kernels/linear-system.js';
import { propagate, uniformMesh } from '../kernels/mesh.js';
import type { Drive } from '../pulse/drive.js';
import { type Bath, relaxationShift } from './bath.js';
import { contentOf, correlationFit } from './correlations.js';
import { requestedHierarchy, withRelaxationEnergy } from './counting.js';
import { buildTower, type Tower } from './tower.js';
import { type TowerLinks, towerLinks } from './tower-links.js';
import { runTower } from './tower-run.js';
import { TowerSystem } from './tower-system.js';
import { type TowerEffect, towerEffects } from './tower-tail.js';
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

/** Weight of the lightest auxiliary operator that is kept. */
const LIGHTEST = 3e-4;
/** Area of the pulse's wings that is left out, rad. */
const NEGLIGIBLE_AREA = 1e-6;
/** Local error of the mesh that the drive alone asks for. */
const TOLERANCE = 1e-8;

/** Counts photons with the hierarchical equations of motion at one size. */
export function countWithHierarchy(request: CountRequest, bath: Bath, size: TowerSize): TowerCount {
  const { frame, shift } = request;
  const drive = trimmed(request.drive, NEGLIGIBLE_AREA);
  const scheme = withRelaxationEnergy(request.scheme, relaxationShift(bath));
  const fit = correlationFit(bath, 'bath', size.terms);
  const { tower, links } = storeys(request, bath, size);
  const generator = buildGenerator(scheme, frame, shift);
  const hierarchy = requestedHierarchy(request, { amplitude: 1, sideband: 0 });
  const system = new TowerSystem(generator, hierarchy, tower, links);
  const bare = new LinearSystem(generator, new HierarchyBuilder().build());
  const filterRate = Math.max(0, ...hierarchy.blocks.map((b) => Math.hypot(b.damping, b.rotation)));
  const base = meshFor(generator, drive, filterRate, { ...request.effort, tolerance: TOLERANCE });
  const run = runTower(system, bare, drive, base, tower.fastest + filterRate, request.effort.kernel);
  const { state } = run;
  const values: Record<string, number> = {};
  for (const { name, factor, lanes } of filterEffects(request, bath, size)) {
    let sum = 0;
    for (const { lane, weights } of lanes) {
      for (let k = 0; k < weights.length; k++) sum += weights[k] * state[k * system.stride + lane];
    }
    values[name] = factor * sum;
  }
  const emitted = { ...hierarchy, targets: hierarchy.targets.filter((t) => !isFiltered(t.name)) };
  const effects = tailEffects(buildGenerator(request.scheme, frame, shift), emitted);
  effects.names.forEach((name, i) => {
    let sum = 0;
    for (let c = 0; c < system.size; c++) {
      for (let lane = 0; lane < hierarchy.lanes; lane++)
        sum += effects.rows[i][c * hierarchy.lanes + lane] * state[system.root(c, lane)];
    }
    values[name] = sum;
  });
  return {
    values,
    populations: decayed(system, generator, state, endOf(request.drive) - endOf(drive)),
    steps: run.steps,
    localErrors: run.localErrors,
    fitError: fit.error,
    operators: tower.operators,
  };
}

const isFiltered = (name: string): boolean => /^m\d+$/.test(name);
const endOf = (drive: Drive): number => drive.breakpoints[drive.breakpoints.length - 1];

const towers = new Memo<{ readonly tower: Tower; readonly links: TowerLinks }>(16);

/** The auxiliary operators of a scheme in a bath, and how they are linked. */
function storeys({ scheme }: CountRequest, bath: Bath, size: TowerSize): { tower: Tower; links: TowerLinks } {
  const excitons = scheme.levels.map((l) => l.excitons);
  return towers.get(contentOf(bath, size.terms, size.depth, ...excitons), () => {
    const fit = correlationFit(bath, 'bath', size.terms);
    const tower = buildTower(fit.poles, size.depth, Math.max(...excitons), LIGHTEST);
    return { tower, links: towerLinks(scheme, tower) };
  });
}

const tails = new Memo<readonly TowerEffect[]>(8);

/** The filtered moments as functionals of the state after the drive, solved in the frame of the filter: the same for all pulses. */
function filterEffects(request: CountRequest, bath: Bath, size: TowerSize): readonly TowerEffect[] {
  const { filter, scheme, dipoles, frame, shift } = request;
  if (!filter) return [];
  const center = frame + filter.center - shift;
  const collected = dipoles.map(({ re, im }) => [...re, ...im].join());
  const key = [JSON.stringify(scheme), ...collected, filter.kappa, center, filter.order];
  return tails.get(contentOf(...key, bath, size.terms, size.depth), () => {
    const { tower, links } = storeys(request, bath, size);
    const raised = withRelaxationEnergy(scheme, relaxationShift(bath));
    const still = { ...request, filter: { ...filter, center: 0 } };
    const hierarchy = requestedHierarchy(still, { amplitude: 1, sideband: 0 });
    return towerEffects(buildGenerator(raised, center, 0), hierarchy, tower, links, isFiltered);
  });
}

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
