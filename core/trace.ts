import { HierarchyBuilder } from './counting/hierarchy.js';
import type { Design } from './design.js';
import { buildGenerator } from './emitter/generator.js';
import { meshFor, STABLE_PHASE } from './kernels/count.js';
import { LinearSystem } from './kernels/linear-system.js';
import { propagate } from './kernels/mesh.js';
import { createDrive } from './pulse/drive.js';
import { situation } from './situation.js';

/** Envelope and populations at one time. */
export interface TracePoint {
  /** ps. */
  readonly time: number;
  /** Re and Im of each drive component (one, or h and v) in the frame of the pulse reference, 1/ps. */
  readonly drive: readonly number[];
  /** In the order of `levels`. */
  readonly populations: readonly number[];
}

export interface Trace {
  readonly levels: readonly string[];
  /** Name of each drive component. */
  readonly components: readonly string[];
  readonly points: readonly TracePoint[];
}

/** Least number of points over the drive window. */
const POINTS = 400;

/** Envelope and populations of a fixed design against time, without drift. */
export function trace(design: Design): Trace {
  const { scheme, frame, drive } = situation(design);
  const generator = buildGenerator(scheme, frame, 0);
  const rho = new LinearSystem(generator, new HierarchyBuilder().build());
  const { breakpoints } = drive;
  const window = breakpoints[breakpoints.length - 1] - breakpoints[0];
  const mesh = meshFor(generator, drive, (STABLE_PHASE * POINTS) / window, {
    tolerance: 1e-11,
    parts: 1,
    nodes: 1,
    series: 'bound',
  });
  const shown = createDrive(design.pulse, { frame: 0, projection: scheme.projection });
  const sample = new Float64Array(2 * shown.components);
  const points: TracePoint[] = [];
  propagate(rho, drive, mesh, (time, y) => {
    const segment = Math.min(mesh.segments.length - 1, points.length);
    shown.sample(time, mesh.segments[segment], sample);
    points.push({
      time,
      drive: Array.from(sample),
      populations: scheme.levels.map((_, i) => y[i * rho.lanes]),
    });
  });
  return {
    levels: scheme.levels.map((l) => l.name),
    components: scheme.projection === 'full' ? ['drive'] : ['h', 'v'],
    points,
  };
}
