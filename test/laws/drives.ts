import {
  type CountResult,
  collectedDipoles,
  countPhotons,
  type Drive,
  emitterModel,
} from '../../core/index.js';
import { twoLevelEmitter } from '../support.js';

/** No decay on the time scale of a pulse, ps. */
export const FOREVER = 1e12;

/** Envelope for tests only: |Ω(t)| with an instantaneous detuning δ(t) whose integral is given, both 1/ps and rad. */
export interface SweptPulse {
  readonly start: number;
  readonly end: number;
  rabi(t: number): number;
  /** ∫δ dt, laser minus emitter. */
  phase(t: number): number;
  readonly scales: Drive['scales'];
}

export function sweptDrive(pulse: SweptPulse): Drive {
  return {
    components: 1,
    frame: 0,
    breakpoints: Float64Array.of(pulse.start, pulse.end),
    cells: [{ from: pulse.start, to: pulse.end, segment: 0, bound: pulse.scales.peakRabi }],
    sample(t, _segment, out) {
      const rabi = pulse.rabi(t);
      const phase = pulse.phase(t);
      out[0] = rabi * Math.cos(phase);
      out[1] = -rabi * Math.sin(phase);
    },
    scales: pulse.scales,
    error: 0,
  };
}

/** Counts a two-level emitter under any drive on its own resonance frame. */
export function countTwoLevel(drive: Drive, lifetime: number): CountResult {
  const scheme = emitterModel('two-level').scheme(twoLevelEmitter({ lifetime }));
  return countPhotons({
    scheme,
    dipoles: collectedDipoles(scheme, 'exciton', 'all'),
    drive,
    frame: 0,
    shift: 0,
    thinning: null,
    filter: null,
    effort: { tolerance: 1e-12, parts: 1, nodes: 1, series: 'bound' },
  });
}

/** Slope of log y against log x by least squares. */
export function logSlope(points: readonly (readonly [number, number])[]): number {
  const x = points.map(([a]) => Math.log(a));
  const y = points.map(([, b]) => Math.log(b));
  const mx = x.reduce((s, v) => s + v, 0) / x.length;
  const my = y.reduce((s, v) => s + v, 0) / y.length;
  const top = x.reduce((s, v, i) => s + (v - mx) * (y[i] - my), 0);
  return top / x.reduce((s, v) => s + (v - mx) ** 2, 0);
}
