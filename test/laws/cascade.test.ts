import { describe, expect, it } from 'vitest';
import { type Design, evaluate, type Figures, HBAR, type Tone } from '../../core/index.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../support.js';

/** A two-photon design: h-polarised Gaussian at half the biexciton energy unless changed. */
function twoPhoton(
  emitter: Parameters<typeof cascadeEmitter>[0],
  changes: Partial<Tone>,
  collection: Partial<Design['collection']> = {},
): Design {
  const base = design(cascadeEmitter(emitter), []);
  return {
    ...base,
    pulse: { reference: 'two-photon', tones: [tone(changes)] },
    collection: { ...base.collection, ...collection },
  };
}

/** Area at which ∫ħΩ²/E_b dt = π for a Gaussian: Θ²ħ/(2√π σ E_b) = π. */
function twoPhotonPiArea(fwhm: number, binding: number): number {
  const sigma = fwhm / (2 * Math.sqrt(Math.LN2));
  return Math.sqrt((2 * Math.PI ** 1.5 * sigma * binding) / HBAR);
}

const FOREVER = { lifetime: 1e12, biexcitonLifetime: 1e12 };

describe('two-photon excitation', () => {
  // Adiabatic elimination of the exciton, Rabi frequency ħΩ²/E_b; Stufler et al., Phys. Rev. B 73, 125304 (2006).
  it.each([12, 20])('first maximum of the biexciton at ∫ħΩ²/E_b dt = π, %s ps', (fwhm) => {
    const law = twoPhotonPiArea(fwhm, 5);
    let best = { area: 0, b: 0 };
    for (let k = -12; k <= 12; k++) {
      const area = law * (1 + k / 200);
      const b = evaluate(twoPhoton(FOREVER, { fwhm, area }), 'search').populations['b'];
      if (b > best.b) best = { area, b };
    }
    expect(best.b).toBeGreaterThan(0.95);
    expect(Math.abs(best.area / law - 1)).toBeLessThan(0.03);
  });

  it('scales with pulse width as the laws say: bare levels off, filtered falls at least quadratically', () => {
    const at = (fwhm: number): Figures =>
      evaluate(
        twoPhoton(
          {},
          { fwhm, area: twoPhotonPiArea(fwhm, 5) },
          { polarization: 'h', filter: { fwhm: 20, center: 0 } },
        ),
        'search',
      );
    const [long, short] = [at(14), at(7)];
    // Derived: Rayleigh light of the far-detuned drive, 2πħγ_X/E_b in one polarisation.
    const floor = (2 * Math.PI * HBAR) / (400 * 5);
    expect(short.emitted.g2! / floor).toBeGreaterThan(0.85);
    expect(short.emitted.g2! / floor).toBeLessThan(1.15);
    expect(long.emitted.g2! / short.emitted.g2!).toBeLessThan(1.15);
    expect(long.filtered!.g2! / short.filtered!.g2!).toBeGreaterThan(4);
  });

  it('a two-level emitter falls linearly with the width', () => {
    const at = (fwhm: number): number =>
      evaluate(design(twoLevelEmitter({ lifetime: 400 }), [tone({ fwhm })]), 'search').emitted.g2!;
    expect(at(6) / at(3)).toBeGreaterThan(1.95);
    expect(at(6) / at(3)).toBeLessThan(2.02);
  });

  // Common practice, no source: two-photon excitation with few-ps pulses gives g⁽²⁾[0] below 1e-4.
  it('has filtered g2 below 1e-4 with few-ps pulses and usual lifetimes', () => {
    const f = evaluate(
      twoPhoton(
        { lifetime: 400, biexcitonLifetime: 200, binding: 2.5 },
        { fwhm: 6, area: twoPhotonPiArea(6, 2.5) },
        { polarization: 'h', filter: { fwhm: 20, center: 0 } },
      ),
      'search',
    );
    expect(f.filtered!.g2!).toBeLessThan(1e-4);
    expect(f.filtered!.mean).toBeGreaterThan(0.4);
  });
});

describe('crossed collection at 45°', () => {
  const lifetime = 400;
  const crossed = (splitting: number): Design => {
    const base = design(cascadeEmitter({ lifetime, biexcitonLifetime: 200, splitting }), [
      tone({ fwhm: 0.3, area: 0.4, polarization: Math.PI / 4 }),
    ]);
    return { ...base, collection: { ...base.collection, polarization: 'crossed' } };
  };

  // Derived: precession of the prepared superposition, γ∫e^{−γt}·½(1 − cos(ft/ħ))dt; half of every biexciton photon.
  it('follows the precession law for what the pulse prepares', () => {
    for (const splitting of [0.004, 0.012, 0.03]) {
      const f = evaluate(crossed(splitting), 'search');
      const exciton = f.populations['h'] + f.populations['v'];
      const precession = 0.5 * (1 - 1 / (1 + ((splitting * lifetime) / HBAR) ** 2));
      const law = precession * exciton + 0.5 * f.populations['b'];
      expect(f.emitted.mean / law).toBeGreaterThan(0.985);
      expect(f.emitted.mean / law).toBeLessThan(1.015);
    }
  });

  it('collects nothing of the exciton without splitting: only half of what the biexciton feeds', () => {
    const f = evaluate(crossed(0), 'search');
    const direct = f.emitted.mean - 0.5 * f.populations['b'];
    // The biexciton that decays inside the drive window (1 % of it) is not in the final population.
    expect(Math.abs(direct)).toBeLessThan(1e-2 * f.populations['b']);
    expect(f.populations['h'] + f.populations['v']).toBeGreaterThan(100 * f.populations['b']);
  });
});

describe('symmetries of the cascade', () => {
  const comparable = (f: Figures): number[] => [
    f.emitted.mean,
    f.emitted.factorial2,
    ...f.emitted.p,
    f.filtered?.mean ?? 0,
    f.filtered?.factorial2 ?? 0,
    f.populations['b'],
  ];
  const filter = { fwhm: 200, center: 3 };

  it('without splitting the angle of the drive does not matter when all light is collected', () => {
    const at = (polarization: number): number[] =>
      comparable(evaluate(twoPhoton({}, { fwhm: 4, area: 12, polarization }, { filter }), 'search'));
    const reference = at(0);
    for (const angle of [0.4, Math.PI / 4, 1.9]) {
      at(angle).forEach((v, i) => {
        expect(Math.abs(v - reference[i])).toBeLessThan(2e-8);
      });
    }
  }, 120_000);

  it('swapping h and v (drive, collection and the sign of the splitting) swaps the figures', () => {
    const at = (polarization: number, splitting: number, axis: 'h' | 'v'): Figures =>
      evaluate(
        twoPhoton({ splitting }, { fwhm: 5, area: 11, polarization }, { polarization: axis, filter }),
        'search',
      );
    const a = at(0.3, 0.02, 'h');
    const b = at(Math.PI / 2 - 0.3, -0.02, 'v');
    comparable(a).forEach((v, i) => {
      expect(Math.abs(v - comparable(b)[i])).toBeLessThan(2e-8);
    });
    expect(Math.abs(a.populations['h'] - b.populations['v'])).toBeLessThan(2e-8);
  });
});

describe('a biexciton far away', () => {
  it('leaves the two-level result, with an error that falls as 1/E_b²', () => {
    const drive = { fwhm: 4, area: Math.PI };
    const two = evaluate(design(twoLevelEmitter({ lifetime: 400 }), [tone(drive)]), 'search').emitted;
    const difference = (binding: number): number => {
      const far = evaluate(design(cascadeEmitter({ binding }), [tone(drive)]), 'search').emitted;
      return Math.abs(far.mean - two.mean);
    };
    const [near, middle, far] = [20, 40, 80].map(difference);
    for (const ratio of [near / middle, middle / far]) {
      expect(ratio).toBeGreaterThan(3.8);
      expect(ratio).toBeLessThan(4.2);
    }
    expect(far).toBeLessThan(1e-6);
  });
});
