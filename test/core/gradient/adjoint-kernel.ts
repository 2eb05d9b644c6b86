import {
  addEmittedCounting,
  addFilteredMoments,
  addThinnedCounting,
  buildGenerator,
  HierarchyBuilder,
  tailEffects,
} from '../../../core/index.js';
import type { CountRequest } from '../../../core/kernels/count.js';
import type { CountWithGradient } from '../../../core/kernels/gradient.js';
import { LinearSystem } from '../../../core/kernels/linear-system.js';
import { type Mesh, uniformMesh } from '../../../core/kernels/mesh.js';
import { NODES, STAGE_WEIGHTS, STAGES, WEIGHTS } from '../../../core/kernels/runge-kutta.js';

/**
 * A slow kernel with derivatives that shares no code with the fast ones: the whole hierarchy on a fixed
 * uniform mesh, differentiated stage by stage (discrete adjoint of a Runge–Kutta step: Hager, Numer. Math. 87, 247 (2000)).
 */
export function adjointKernel(steps: number): CountWithGradient {
  return (request, seeds) => {
    const problem = problemOf(request);
    const mesh = uniformMesh(request.drive, steps);
    const forward = run(problem, request, mesh);
    const values = valuesOf(problem, forward.end);
    const byFilter = (key: 'kappa' | 'center', h: number) => {
      const { filter } = request;
      if (!filter) return () => 0;
      const [p1, m1, p2, m2] = [h, -h, 2 * h, -2 * h].map((by) => {
        const moved = { ...request, filter: { ...filter, [key]: filter[key] + by } };
        const p = problemOf(moved);
        return valuesOf(p, run(p, moved, mesh).end);
      });
      return (weights: Readonly<Record<string, number>>) =>
        (8 * (dot(weights, p1) - dot(weights, m1)) - (dot(weights, p2) - dot(weights, m2))) / (12 * h);
    };
    const wanted = seeds(values);
    const kappa = wanted.length > 0 ? byFilter('kappa', 1e-3) : () => 0;
    const center = wanted.length > 0 ? byFilter('center', 1e-3) : () => 0;
    const sensitivities = wanted.map((weights) => {
      const start = new Float64Array(problem.size);
      problem.names.forEach((name, i) => {
        for (let k = 0; k < start.length; k++) start[k] += (weights[name] ?? 0) * problem.rows[i][k];
      });
      return {
        drive: backward(problem, mesh, forward.stages, start),
        shift: 0,
        kappa: kappa(weights),
        center: center(weights),
      };
    });
    const times: number[] = [];
    const segments: number[] = [];
    mesh.segments.forEach((segment, n) => {
      for (const c of NODES.slice(0, STAGES)) {
        times.push(mesh.times[n] + c * (mesh.times[n + 1] - mesh.times[n]));
        segments.push(segment);
      }
    });
    return {
      result: {
        values,
        populations: request.scheme.levels.map((_, i) => forward.end[i * problem.lanes]),
        steps,
        localErrors: 0,
      },
      times: Float64Array.from(times),
      segments: Int32Array.from(segments),
      sensitivities,
    };
  };
}

type Sparse = readonly { readonly row: number; readonly col: number; readonly value: number }[];

interface Problem {
  readonly size: number;
  readonly lanes: number;
  /** Generator without drive, then per Re and Im of each component. */
  readonly parts: readonly Sparse[];
  readonly start: Float64Array;
  readonly names: readonly string[];
  readonly rows: readonly Float64Array[];
}

function problemOf(request: CountRequest): Problem {
  const { scheme, dipoles, frame, shift, thinning, filter, drive } = request;
  const builder = new HierarchyBuilder();
  if (!filter) addEmittedCounting(builder, dipoles);
  if (thinning !== null) addThinnedCounting(builder, dipoles, thinning);
  if (filter) addFilteredMoments(builder, dipoles, filter, filter.order);
  const hierarchy = builder.build();
  const generator = buildGenerator(scheme, frame, shift);
  const system = new LinearSystem(generator, hierarchy);
  const size = system.length;
  const width = 2 * drive.components;
  const partOf = (values: Float64Array, less: Sparse): Sparse => {
    const unit = new Float64Array(size);
    const out: { row: number; col: number; value: number }[] = [];
    for (let col = 0; col < size; col++) {
      const column = new Float64Array(size);
      unit[col] = 1;
      system.derivative(values, unit, column);
      unit[col] = 0;
      for (const entry of less) if (entry.col === col) column[entry.row] -= entry.value;
      column.forEach((value, row) => {
        if (value !== 0) out.push({ row, col, value });
      });
    }
    return out;
  };
  const still = partOf(new Float64Array(width), []);
  const parts = Array.from({ length: width }, (_, p) => {
    const values = new Float64Array(width);
    values[p] = 1;
    return partOf(values, still);
  });
  const { names, rows } = tailEffects(generator, hierarchy);
  return { size, lanes: system.lanes, parts: [still, ...parts], start: system.initial(), names, rows };
}

/** into += factor · m y, or mᵀ y. */
function apply(
  m: Sparse,
  factor: number,
  y: Float64Array,
  into: Float64Array,
  transposed = false,
): Float64Array {
  if (factor === 0) return into;
  for (const { row, col, value } of m) {
    if (transposed) into[col] += factor * value * y[row];
    else into[row] += factor * value * y[col];
  }
  return into;
}

function derivative(
  { parts }: Problem,
  drive: Float64Array,
  y: Float64Array,
  transposed = false,
): Float64Array {
  const out = apply(parts[0], 1, y, new Float64Array(y.length), transposed);
  drive.forEach((x, p) => {
    apply(parts[p + 1], x, y, out, transposed);
  });
  return out;
}

interface Stage {
  readonly h: number;
  readonly drive: Float64Array;
  readonly y: Float64Array;
}

function run(problem: Problem, { drive }: CountRequest, mesh: Mesh): { end: Float64Array; stages: Stage[] } {
  let y = problem.start;
  const stages: Stage[] = [];
  const sample = new Float64Array(2 * drive.components);
  mesh.segments.forEach((segment, n) => {
    const h = mesh.times[n + 1] - mesh.times[n];
    const ks: Float64Array[] = [];
    for (let s = 0; s < STAGES; s++) {
      const at = y.map((x, i) => x + h * STAGE_WEIGHTS[s].reduce((sum, a, r) => sum + a * ks[r][i], 0));
      drive.sample(mesh.times[n] + NODES[s] * h, segment, sample);
      ks.push(derivative(problem, sample, at));
      stages.push({ h, drive: sample.slice(), y: at });
    }
    y = y.map((x, i) => x + h * WEIGHTS.reduce((sum, b, r) => sum + b * ks[r][i], 0));
  });
  return { end: y, stages };
}

function backward(problem: Problem, mesh: Mesh, stages: readonly Stage[], end: Float64Array): Float64Array {
  const width = problem.parts.length - 1;
  const out = new Float64Array(stages.length * width);
  let lambda = end;
  for (let n = mesh.segments.length - 1; n >= 0; n--) {
    const mus: Float64Array[] = [];
    for (let s = STAGES - 1; s >= 0; s--) {
      const { h, drive, y } = stages[n * STAGES + s];
      const kappa = lambda.map((x, i) => {
        let sum = WEIGHTS[s] * x;
        for (let r = s + 1; r < STAGES; r++) sum += (STAGE_WEIGHTS[r][s] ?? 0) * mus[r][i];
        return h * sum;
      });
      mus[s] = derivative(problem, drive, kappa, true);
      for (let p = 0; p < width; p++) {
        const moved = apply(problem.parts[p + 1], 1, y, new Float64Array(y.length));
        out[(n * STAGES + s) * width + p] = moved.reduce((sum, x, i) => sum + x * kappa[i], 0);
      }
    }
    lambda = lambda.map((x, i) => x + mus.reduce((sum, mu) => sum + mu[i], 0));
  }
  return out;
}

const valuesOf = ({ names, rows }: Problem, y: Float64Array): Record<string, number> =>
  Object.fromEntries(names.map((name, i) => [name, rows[i].reduce((sum, x, k) => sum + x * y[k], 0)]));

const dot = (weights: Readonly<Record<string, number>>, values: Readonly<Record<string, number>>): number =>
  Object.entries(weights).reduce((sum, [name, w]) => sum + w * values[name], 0);
