import { describe, expect, it } from 'vitest';
import { HierarchyBuilder } from '../../../core/counting/hierarchy.js';
import { buildGenerator } from '../../../core/emitter/generator.js';
import { type CountRequest, type CountResult, countByReference } from '../../../core/kernels/count.js';
import { propagate } from '../../../core/kernels/mesh.js';
import { displacement, occupation, relaxationShift, spectralDensity } from '../../../core/phonons/bath.js';
import { correlationFit, frankCondon } from '../../../core/phonons/correlations.js';
import { countWithPhonons } from '../../../core/phonons/count.js';
import { withRelaxationEnergy } from '../../../core/phonons/counting.js';
import { buildTower } from '../../../core/phonons/tower.js';
import { towerLinks } from '../../../core/phonons/tower-links.js';
import { TowerSystem } from '../../../core/phonons/tower-system.js';
import { HBAR, K_B } from '../../../core/units/constants.js';
import { phonons, twoLevelRequest } from './support.js';

const SECOND_ORDER = ['weak-coupling', 'polaron'] as const;
const METHODS = [...SECOND_ORDER, 'exact'] as const;

/** Free evolution between two π/2 pulses of `fwhm` ps, short against the bath. */
function ramsey(fwhm: number, delay: number) {
  const short = { fwhm, area: Math.PI / 2 };
  return twoLevelRequest([short, { ...short, delay }]);
}

/**
 * By how much coherence starts before the middle of a π/2 pulse: it grows as sin θ(t), whose step-like centre lies where
 * ∫(sin θ − step) vanishes.
 */
function headStart(fwhm: number): number {
  const sigma = fwhm / (2 * Math.sqrt(Math.LN2));
  const h = sigma / 500;
  let theta = 0;
  let sum = 0;
  for (let t = -7 * sigma; t < 7 * sigma; t += h) {
    theta +=
      ((Math.PI / 2) * h * Math.exp(-((t + h / 2) ** 2) / (2 * sigma ** 2))) /
      (sigma * Math.sqrt(2 * Math.PI));
    sum += h * (t + h / 2 < 0 ? Math.sin(theta) : Math.sin(theta) - 1);
  }
  return sum;
}

describe('independent-boson model (Mahan, Many-Particle Physics, section 4.3)', () => {
  const bath = phonons(4);
  /** Two π/2 pulses read Re of the coherence factor exp(φ(t) − φ(0)). */
  const law = (fwhm: number, t: number): number => {
    const { re, im } = displacement(bath, Float64Array.of(0, t + 2 * headStart(fwhm)));
    return (1 + Math.exp(re[1] - re[0]) * Math.cos(im[1])) / 2;
  };
  /** Deviation in the limit of δ-pulses, to which it tends linearly. */
  const deviation = (t: number, count: (request: CountRequest) => CountResult): number => {
    const at = (fwhm: number): number => count(ramsey(fwhm, t)).populations[1] - law(fwhm, t);
    return 2 * at(0.01) - at(0.02);
  };

  it('second order without transformation is exact for the bath alone', () => {
    for (const t of [0.3, 2.5]) {
      expect(Math.abs(deviation(t, (r) => countWithPhonons(r, bath, 'weak-coupling')))).toBeLessThan(5e-5);
    }
  });

  it('the hierarchy follows the coherence to 1e-5', () => {
    const fit = correlationFit(bath, 'bath', 10);
    expect(fit.error).toBeLessThan(3e-6);
    const request = twoLevelRequest([{}]);
    const scheme = withRelaxationEnergy(request.scheme, relaxationShift(bath));
    const tower = buildTower(fit.poles, 4, 1, 0);
    const links = towerLinks(scheme, tower);
    const flow = new TowerSystem(buildGenerator(scheme, 0, 0), new HierarchyBuilder().build(), tower, links);
    for (const t of [0.3, 1, 2.5, 6]) {
      const start = flow.initial();
      // Right after a δ-pulse of area π/2 the emitter has turned and the bath has not moved.
      start[flow.root(0, 0)] = 0.5;
      start[flow.root(1, 0)] = 0.5;
      start[flow.root(2, 0)] = 0.5;
      const silent = {
        components: 1,
        breakpoints: Float64Array.of(0, t),
        scales: { peakRabi: 0, frequency: 0, time: t },
        sample: (_t: number, _segment: number, out: Float64Array) => out.fill(0),
      };
      const steps = Math.ceil((t * tower.fastest) / 4);
      const times = Float64Array.from({ length: steps + 1 }, (_, k) => (t * k) / steps);
      const state = propagate(
        { length: flow.length, initial: () => start, derivative: (d, y, dy) => flow.derivative(d, y, dy) },
        silent,
        { times, segments: new Int32Array(steps), localErrors: 0 },
      );
      const { re } = displacement(bath, Float64Array.of(0, t));
      const coherence = 2 * Math.hypot(state[flow.root(2, 0)], state[flow.root(3, 0)]);
      expect(Math.abs(coherence - Math.exp(re[1] - re[0]))).toBeLessThan(1e-5);
      expect(state[flow.root(1, 0)]).toBeCloseTo(0.5, 9);
    }
  });

  it('the zero-phonon line keeps exp(−Aω_c²/2) at zero temperature', () => {
    expect(frankCondon(phonons(0)) ** 2).toBeCloseTo(Math.exp((-0.03 * 2.2 ** 2) / 2), 12);
  });
});

describe('weak coupling to a steadily driven emitter', () => {
  const coupling = 0.003;
  const bath = phonons(10, { coupling });
  const square = (rabi: number, duration: number, detuning = 0) =>
    twoLevelRequest([{ shape: 'square', fwhm: duration, area: rabi * duration, detuning }]);

  // Ramsay et al., Phys. Rev. Lett. 104, 017402 (2010): Rabi oscillations damp at half of Γ = (π/2) J(Ω) (2n + 1).
  it('damps Rabi oscillations at the golden-rule rate', () => {
    const rabi = 1.2;
    const gamma = (Math.PI / 2) * spectralDensity(bath, rabi) * (2 * occupation(rabi, bath.temperature) + 1);
    for (const method of SECOND_ORDER) {
      const amplitude = (t: number): number => {
        const quarter = Math.PI / 2 / rabi;
        const at = (s: number): number =>
          countWithPhonons(square(rabi, s), bath, method).populations[1] - 0.5;
        return Math.hypot(at(t), at(t + quarter));
      };
      const rate = Math.log(amplitude(20) / amplitude(120)) / 100;
      expect(rate / (gamma / 2)).toBeGreaterThan(0.95);
      expect(rate / (gamma / 2)).toBeLessThan(1.05);
    }
  });

  // Golden rule: up over down = exp(−ħΛ/k_BT), so the lower dressed state ends with ½(1 + tanh(ħΛ/2k_BT)).
  it('relaxes between dressed states in detailed balance', () => {
    const rabi = 1;
    const detuning = 1;
    const splitting = Math.hypot(rabi, detuning / HBAR);
    const balance = Math.tanh((HBAR * splitting) / (2 * K_B * bath.temperature));
    const law = (1 + (detuning / HBAR / splitting) * balance) / 2;
    for (const method of SECOND_ORDER) {
      const { populations } = countWithPhonons(square(rabi, 1200, detuning), bath, method);
      expect(Math.abs(populations[1] - law)).toBeLessThan(6e-3);
    }
  });
});

describe('limits', () => {
  it('does nothing without a drive', () => {
    const request = twoLevelRequest([{ area: 0 }], 200);
    for (const method of METHODS) {
      const { populations, values } = countWithPhonons(request, phonons(20), method);
      expect(populations[0]).toBeCloseTo(1, 12);
      expect(values['mean']).toBeCloseTo(0, 12);
      expect(values['p0']).toBeCloseTo(1, 12);
    }
  });

  it('gives the bare figures when the coupling goes to zero', () => {
    const request = twoLevelRequest([{ fwhm: 4, area: 2, detuning: 0.2 }], 150, {
      filter: { kappa: 0.2, center: 0.05, order: 3 },
    });
    const bare = countByReference(request);
    for (const method of METHODS) {
      const weak = countWithPhonons(request, phonons(4, { coupling: 1e-7 }), method);
      // The hierarchy leaves out the last 1e-6 of the pulse's area.
      const tolerance = method === 'exact' ? 1e-5 : 1e-6;
      for (const [name, value] of Object.entries(bare.values)) {
        expect(Math.abs(weak.values[name] - value), `${method} ${name}`).toBeLessThan(
          tolerance * Math.max(Math.abs(value), 1e-3),
        );
      }
      // At the end of the drive's window, whatever the method itself integrates.
      expect(Math.abs(weak.populations[1] - bare.populations[1]), method).toBeLessThan(3e-6);
    }
  });
});
