import type { Drive } from '../pulse/drive.js';
import type { LinearFlow } from './linear-system.js';
import { ERROR3, ERROR5, NODES, STAGE_WEIGHTS, STAGES, WEIGHTS } from './runge-kutta.js';

/** What the propagator needs of a drive; there may be more sampled coefficients than Re Ω and Im Ω per polarisation. */
export type SampledDrive = Pick<Drive, 'breakpoints' | 'scales' | 'sample'> & { readonly components: number };

/** One explicit Runge–Kutta step of order 8 on a linear system; work space is allocated once. */
export class Stepper {
  private readonly stages: Float64Array[];
  private readonly trial: Float64Array;
  private readonly sample: Float64Array;

  constructor(
    private readonly system: LinearFlow,
    private readonly drive: SampledDrive,
  ) {
    this.stages = Array.from({ length: STAGES }, () => new Float64Array(system.length));
    this.trial = new Float64Array(system.length);
    this.sample = new Float64Array(2 * drive.components);
  }

  /** Advances y from t by h into `out` (may be y itself). */
  advance(t: number, h: number, segment: number, y: Float64Array, out: Float64Array): void {
    const { stages, trial, system, drive, sample } = this;
    const n = system.length;
    for (let s = 0; s < STAGES; s++) {
      let state = y;
      if (s > 0) {
        combineStages(y, stages, STAGE_WEIGHTS[s], h, trial, n);
        state = trial;
      }
      drive.sample(t + NODES[s] * h, segment, sample);
      system.derivative(sample, state, stages[s]);
    }
    combineStages(y, stages, WEIGHTS, h, out, n);
  }

  /** Local error of the last step (largest coordinate), from the embedded estimates of orders 5 and 3. */
  localError(h: number): number {
    const { stages, system } = this;
    let worst = 0;
    for (let i = 0; i < system.length; i++) {
      let e5 = 0;
      let e3 = 0;
      for (let s = 0; s < STAGES; s++) {
        const k = stages[s][i];
        e5 += ERROR5[s] * k;
        e3 += ERROR3[s] * k;
      }
      const scale = e5 * e5 + 0.01 * e3 * e3;
      if (scale > 0) worst = Math.max(worst, (Math.abs(h) * e5 * e5) / Math.sqrt(scale));
    }
    return worst;
  }
}

/** Coordinates combined at a time: the running sum of a long state stays in the nearest cache. */
const CHUNK = 1024;

/** out = y + h Σ w_s k_s, four stages a pass: a pass per stage is two and a half times slower in V8. */
function combineStages(
  y: Float64Array,
  stages: readonly Float64Array[],
  weights: readonly number[],
  h: number,
  out: Float64Array,
  n: number,
): void {
  for (let begin = 0; begin < n; begin += CHUNK) {
    combineChunk(y, stages, weights, h, out, begin, Math.min(n, begin + CHUNK));
  }
}

function combineChunk(
  y: Float64Array,
  stages: readonly Float64Array[],
  weights: readonly number[],
  h: number,
  out: Float64Array,
  begin: number,
  end: number,
): void {
  let source = y;
  let s = 0;
  while (s < weights.length) {
    const used: number[] = [];
    while (used.length < 4 && s < weights.length) {
      if (weights[s] !== 0) used.push(s);
      s++;
    }
    const at = (k: number): number => used[k] ?? used[0];
    const w = (k: number): number => (k < used.length ? weights[used[k]] * h : 0);
    if (used.length === 0) return;
    addFour(
      out,
      source,
      stages[at(0)],
      w(0),
      stages[at(1)],
      w(1),
      stages[at(2)],
      w(2),
      stages[at(3)],
      w(3),
      begin,
      end,
    );
    source = out;
  }
}

function addFour(
  out: Float64Array,
  y: Float64Array,
  a: Float64Array,
  wa: number,
  b: Float64Array,
  wb: number,
  c: Float64Array,
  wc: number,
  d: Float64Array,
  wd: number,
  begin: number,
  end: number,
): void {
  for (let i = begin; i < end; i++) out[i] = y[i] + (wa * a[i] + wb * b[i]) + (wc * c[i] + wd * d[i]);
}
