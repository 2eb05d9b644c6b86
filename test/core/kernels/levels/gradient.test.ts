import { describe, expect, it } from 'vitest';
import type { Design } from '../../../../core/index.js';
import { type CountRequest, countByReference } from '../../../../core/kernels/count.js';
import { levels } from '../../../../core/kernels/fast/levels/kernel.js';
import { cascadeEmitter, design, tone } from '../../../support.js';
import { requestOf } from '../fast-designs.js';

type Values = Readonly<Record<string, number>>;

/** Fourth-order central difference of every figure, by the reference propagator. */
function difference(at: (x: number) => CountRequest, step: number): (name: string) => number {
  const count = (x: number): Values => {
    const request = at(x);
    return countByReference({ ...request, effort: { ...request.effort, tolerance: 1e-12 } }).values;
  };
  const [a, b, c, d] = [count(step), count(-step), count(2 * step), count(-2 * step)];
  return (name) => (8 * (a[name] - b[name]) - (c[name] - d[name])) / (12 * step);
}

/** A complex bump beside the middle of the pulse. */
const bump = (t: number, width: number): [number, number] => {
  const size = Math.exp(-((t / width - 0.3) ** 2) / 2);
  return [size * Math.cos((0.3 * t) / width + 0.4), size * Math.sin((0.3 * t) / width + 0.4)];
};

function check(d: Design, names: readonly string[], tolerance: number): void {
  const whole = requestOf(d);
  const request = { ...whole, thinning: null, filter: whole.filter && { ...whole.filter, order: 2 } };
  const found = levels.countWithGradient?.(
    { ...request, effort: { ...request.effort, tolerance: 1e-11 } },
    () => names.map((name) => ({ [name]: 1 })),
  );
  if (!found) throw new Error('no derivatives');
  const { drive, filter } = request;
  const { time, peakRabi } = drive.scales;
  const driven = difference(
    (x) => ({
      ...request,
      drive: {
        ...drive,
        gaussians: null,
        sample(t, segment, out) {
          drive.sample(t, segment, out);
          const [a, b] = bump(t, time);
          out[0] += x * a;
          out[1] += x * b;
        },
      },
    }),
    3e-3 * peakRabi,
  );
  const shifted = difference((x) => ({ ...request, shift: request.shift + x }), 3e-3);
  const wider =
    filter && difference((x) => ({ ...request, filter: { ...filter, kappa: filter.kappa + x } }), 1e-3);
  const moved =
    filter && difference((x) => ({ ...request, filter: { ...filter, center: filter.center + x } }), 1e-3);
  names.forEach((name, i) => {
    const s = found.sensitivities[i];
    let along = 0;
    found.times.forEach((t, k) => {
      const [a, b] = bump(t, time);
      along += s.drive[4 * k] * a + s.drive[4 * k + 1] * b;
    });
    const near = (value: number, exact: number): void => {
      expect(Math.abs(value - exact)).toBeLessThan(tolerance * Math.abs(exact) + 1e-10);
    };
    near(along, driven(name));
    near(s.shift, shifted(name));
    if (wider) near(s.kappa, wider(name));
    if (moved) near(s.center, moved(name));
  });
}

/* Source: central differences of the independent adaptive Runge–Kutta propagator. */
describe('derivatives with more than two levels', () => {
  const emitter = cascadeEmitter({
    lifetime: 300,
    biexcitonLifetime: 170,
    binding: 2,
    splitting: 0.03,
    dephasing: 0.002,
  });
  const pulse = [tone({ fwhm: 4, area: 6, detuning: 0.4, gdd: 9 })];

  it('of emitted light, by drive and shift', () => {
    check(design(emitter, pulse), ['p0', 'p1', 'mean', 'multiphoton', 'factorial2'], 2e-5);
  });

  it('of two pulses with a gap between them', () => {
    check(
      design(emitter, [tone({ fwhm: 3, area: 2 }), tone({ fwhm: 2, area: 4, delay: 40, phase: 1 })]),
      ['p0', 'multiphoton'],
      5e-5,
    );
  }, 120_000);

  it('of filtered light, by width and centre of the filter too', () => {
    const d = design(emitter, pulse, {
      collection: { line: 'exciton', polarization: 'h', efficiency: 1, filter: { fwhm: 60, center: 4 } },
    });
    check(d, ['m1', 'm2'], 5e-5);
  }, 240_000);

  it('are left out where the other polarisation would have one', () => {
    const crossed = design(emitter, [tone({ polarization: 0.5 })], {
      collection: { line: 'exciton', polarization: 'crossed', efficiency: 1, filter: null },
    });
    expect(levels.countWithGradient?.(requestOf(crossed), () => [{ p0: 1 }])).toBeNull();
  });
});
