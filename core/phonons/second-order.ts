import type { Hierarchy } from '../counting/hierarchy.js';
import { tailEffects } from '../counting/tail.js';
import { buildGenerator, type Generator } from '../emitter/generator.js';
import type { CountRequest, CountResult } from '../kernels/count.js';
import { meshFor } from '../kernels/count.js';
import { LinearSystem } from '../kernels/linear-system.js';
import { type Mesh, propagate, refineMesh } from '../kernels/mesh.js';
import type { SampledDrive } from '../kernels/step.js';
import type { Drive } from '../pulse/drive.js';
import { type LineShare, requestedHierarchy } from './counting.js';
import { MemoryReader, type MemoryTable, tabulateMemory } from './memory.js';
import type { SecondOrderModel } from './model.js';

/** Longest step over the bath's time scale while the bath itself moves. */
const TRANSIENT_STEP = 0.8;

/**
 * Counts photons with a second-order method: the memory of the bath is one more superoperator that every operator of
 * the counting hierarchy obeys. After the drive the bath only dresses the levels, so the tail is that of the bare ones.
 */
export function countSecondOrder(
  request: CountRequest,
  model: SecondOrderModel,
  share: LineShare,
  bath: { readonly time: number; readonly settling: number },
): CountResult {
  const { scheme, frame, shift, effort } = request;
  const hierarchy = requestedHierarchy(request, share);
  const table = tabulateMemory(model, request.drive, {
    frame,
    shift,
    parts: effort.parts,
    bathTime: bath.time,
    settling: bath.settling,
  });
  const generator = buildGenerator(model.scheme, frame, shift);
  const system = new MemorySystem(generator, hierarchy, table, 2 * request.drive.components);
  const mesh = shortened(
    meshFor(generator, plainDrive(request.drive, table, model.driveFactor), system.fastest, effort),
    table,
    TRANSIENT_STEP * bath.time,
  );
  const drive = dressedDrive(request.drive, table, model.driveFactor);
  const driveEnd = request.drive.breakpoints[request.drive.breakpoints.length - 1];
  let populations: readonly number[] = [];
  const steps = effort.parts > 1 ? refineMesh(mesh, effort.parts) : mesh;
  const state = propagate(system, drive, steps, (t, y) => {
    if (t <= driveEnd) populations = scheme.levels.map((_, i) => y[i * system.lanes]);
  });
  const effects = tailEffects(buildGenerator(scheme, frame, shift), hierarchy);
  const values: Record<string, number> = {};
  effects.names.forEach((name, i) => {
    values[name] = effects.rows[i].reduce((sum, e, k) => sum + e * state[k], 0);
  });
  return {
    values,
    populations,
    steps: mesh.segments.length * effort.parts,
    localErrors: mesh.localErrors,
  };
}

/** The counting hierarchy with the memory's entries, sampled behind the drive values, added to L(t). */
class MemorySystem extends LinearSystem {
  /** Entry of L(t) that each of the memory's adds to. */
  private readonly places: Int32Array;

  constructor(
    generator: Generator,
    hierarchy: Hierarchy,
    table: MemoryTable,
    private readonly offset: number,
  ) {
    super(withRoomFor(generator, table), hierarchy);
    const { row, col } = this.entries;
    const size = this.size;
    const index = new Map(Array.from(row, (r, k) => [r * size + col[k], k]));
    this.places = Int32Array.from(table.row, (r, e) => index.get(r * size + table.col[e]) as number);
  }

  protected override refresh(sample: Float64Array): void {
    super.refresh(sample);
    const { places, values, offset } = this;
    for (let e = 0; e < places.length; e++) values[places[e]] += sample[offset + e];
  }
}

/** The generator with an entry, be it zero, wherever the memory has one. */
function withRoomFor(generator: Generator, { row, col }: MemoryTable): Generator {
  const { constant } = generator;
  return {
    ...generator,
    constant: {
      size: constant.size,
      row: Int32Array.of(...constant.row, ...row),
      col: Int32Array.of(...constant.col, ...col),
      value: Float64Array.of(...constant.value, ...new Float64Array(row.length)),
    },
  };
}

function windowOf(table: MemoryTable): Float64Array {
  const { segments } = table;
  return Float64Array.from([...segments.map((s) => s.start), segments[segments.length - 1].end]);
}

/** The scaled drive on the segments of a table, silent when it is over. */
function plainDrive(drive: Drive, table: MemoryTable, factor: number): Drive {
  return {
    ...drive,
    breakpoints: windowOf(table),
    scales: { ...drive.scales, peakRabi: factor * drive.scales.peakRabi },
    sample(t, segment, out) {
      const { source } = table.segments[segment];
      if (source < 0) {
        for (let k = 0; k < 2 * drive.components; k++) out[k] = 0;
        return;
      }
      drive.sample(t, source, out);
      for (let k = 0; k < 2 * drive.components; k++) out[k] *= factor;
    },
  };
}

/** The same with the memory's entries appended to each sample. */
function dressedDrive(drive: Drive, table: MemoryTable, factor: number): SampledDrive {
  const plain = plainDrive(drive, table, factor);
  const reader = new MemoryReader(table);
  return {
    components: drive.components + Math.ceil(table.row.length / 2),
    breakpoints: plain.breakpoints,
    scales: plain.scales,
    sample(t, segment, out) {
      plain.sample(t, segment, out);
      reader.read(segment, t, out, 2 * drive.components);
    },
  };
}

/** Cuts the steps of segments in which the bath itself moves. */
function shortened(mesh: Mesh, table: MemoryTable, longest: number): Mesh {
  const times: number[] = [mesh.times[0]];
  const segments: number[] = [];
  for (let k = 0; k < mesh.segments.length; k++) {
    const a = mesh.times[k];
    const b = mesh.times[k + 1];
    const pieces = table.segments[mesh.segments[k]].transient ? Math.ceil((b - a) / longest) : 1;
    for (let p = 1; p <= pieces; p++) {
      times.push(p === pieces ? b : a + ((b - a) * p) / pieces);
      segments.push(mesh.segments[k]);
    }
  }
  return {
    times: Float64Array.from(times),
    segments: Int32Array.from(segments),
    localErrors: mesh.localErrors,
  };
}
