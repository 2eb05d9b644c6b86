import type { Drive } from '../../../pulse/drive.js';
import { BlochStep } from '../bloch-step.js';
import type { TwoLevel } from '../two-level.js';
import { ROW } from './propagate.js';

/** Uniform steps over the whole drive window. */
export interface Grid {
  readonly start: number;
  readonly h: number;
  readonly count: number;
  readonly follow: boolean;
}

/** Fills the table of steps in the frame of the filter, in which open legs stand still. */
export class TableFiller {
  private readonly step: BlochStep;
  private readonly sample = new Float64Array(2);
  private segment = 0;

  /** @param center of the filter in the drive's frame, 1/ps @param scale of the drive in the rotation */
  constructor(
    private readonly drive: Drive,
    private readonly model: TwoLevel,
    private readonly center: number,
    private readonly grid: Grid,
    scale: number,
  ) {
    const bare = { ...model, decay: 0, dephasing: 0, weight: model.weight * scale };
    this.step = new BlochStep(drive, bare, grid.h, grid.follow);
  }

  fill(from: number, to: number, table: Float64Array): void {
    const { drive, grid, step, sample, model, center } = this;
    const { breakpoints } = drive;
    const last = breakpoints.length - 2;
    const { matrix } = step;
    for (let n = from, k = 0; n < to; n++, k += ROW) {
      const t = grid.start + (n + 0.5) * grid.h;
      while (this.segment < last && t - 0.4 * grid.h >= breakpoints[this.segment + 1]) this.segment++;
      let middle = this.segment;
      while (middle < last && t >= breakpoints[middle + 1]) middle++;
      let right = middle;
      while (right < last && t + 0.4 * grid.h >= breakpoints[right + 1]) right++;
      step.advance(t, this.segment, middle, right);
      drive.sample(t + 0.5 * grid.h, right, sample);
      turned(matrix, center * n * grid.h, center * (n + 1) * grid.h, sample, model.weight, table, k);
    }
  }
}

/** The rotation and the drive in a frame whose phase is `before` and `after` at the ends of the step. */
function turned(
  m: Float64Array,
  before: number,
  after: number,
  sample: Float64Array,
  weight: number,
  table: Float64Array,
  k: number,
): void {
  if (before === 0 && after === 0) {
    for (let i = 0; i < 9; i++) table[k + i] = m[i];
    table[k + 9] = weight * sample[0];
    table[k + 10] = weight * sample[1];
    return;
  }
  const c0 = Math.cos(before);
  const s0 = Math.sin(before);
  const c1 = Math.cos(after);
  const s1 = Math.sin(after);
  const a0 = m[0] * c0 + m[1] * s0;
  const a1 = m[1] * c0 - m[0] * s0;
  const b0 = m[3] * c0 + m[4] * s0;
  const b1 = m[4] * c0 - m[3] * s0;
  table[k] = c1 * a0 + s1 * b0;
  table[k + 1] = c1 * a1 + s1 * b1;
  table[k + 2] = c1 * m[2] + s1 * m[5];
  table[k + 3] = c1 * b0 - s1 * a0;
  table[k + 4] = c1 * b1 - s1 * a1;
  table[k + 5] = c1 * m[5] - s1 * m[2];
  table[k + 6] = m[6] * c0 + m[7] * s0;
  table[k + 7] = m[7] * c0 - m[6] * s0;
  table[k + 8] = m[8];
  table[k + 9] = weight * (sample[0] * c1 - sample[1] * s1);
  table[k + 10] = weight * (sample[0] * s1 + sample[1] * c1);
}
