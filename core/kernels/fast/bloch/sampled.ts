import type { Drive } from '../../../pulse/drive.js';
import { type PhaseFrame, phaseAt } from './frame.js';
import { NODES, OUTER, PLACES } from './nodes.js';
import type { Grid } from './table.js';

const value = new Float64Array(2);

/**
 * Samples any drive to re = out[8n + 2j], im = out[8n + 2j + 1], times `scale`, in a frame. With `turns` each step follows
 * the phase of the drive across its outer nodes; turns[n] receives the angle gained over the step.
 */
export function sampleDrive(
  drive: Drive,
  frame: PhaseFrame,
  scale: number,
  grid: Grid,
  from: number,
  to: number,
  segments: { readonly first: number; readonly last: number },
  turns: Float64Array | null,
  out: Float64Array,
): void {
  const { breakpoints } = drive;
  let segment = segments.first;
  for (let n = from; n < to; n++) {
    for (let j = 0; j < NODES; j++) {
      const t = grid.start + (n + 0.5 + PLACES[j]) * grid.h;
      while (segment < segments.last && t >= breakpoints[segment + 1]) segment++;
      drive.sample(t, segment, value);
      const angle = -phaseAt(frame, t);
      const c = scale * Math.cos(angle);
      const s = scale * Math.sin(angle);
      out[2 * (NODES * n + j)] = value[0] * c - value[1] * s;
      out[2 * (NODES * n + j) + 1] = value[0] * s + value[1] * c;
    }
    if (turns) turns[n] = follow(out, 2 * NODES * n);
  }
}

/** Turns the nodes of a step back by the phase that the drive gains between the outer ones. */
function follow(out: Float64Array, i: number): number {
  const re = out[i + 6] * out[i] + out[i + 7] * out[i + 1];
  const im = out[i + 7] * out[i] - out[i + 6] * out[i + 1];
  if (im === 0 || !(re * re + im * im > 0)) return 0;
  const gained = Math.atan2(im, re) / (2 * OUTER);
  for (let j = 0; j < NODES; j++) {
    const c = Math.cos(gained * PLACES[j]);
    const s = -Math.sin(gained * PLACES[j]);
    const a = out[i + 2 * j];
    const b = out[i + 2 * j + 1];
    out[i + 2 * j] = a * c - b * s;
    out[i + 2 * j + 1] = a * s + b * c;
  }
  return gained;
}
