import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  type Dimension,
  dimensions,
  exactQuantity,
  formatQuantity,
  inUnit,
  parseQuantity,
} from '../../../core/index.js';

/** e/h, Hz per eV: exact quotient of the SI constants (CODATA 2018/2022: 2.417 989 242…e14). */
const HZ_PER_EV = 1.602176634e-19 / 6.62607015e-34;

/** Value of one of each unit in the internal unit. SI prefixes: BIPM SI brochure (2019); energies through h: CODATA. */
const oneOf: Record<Dimension, Record<string, number>> = {
  time: { fs: 1e-3, ps: 1, ns: 1e3, us: 1e6 },
  gdd: { 'fs^2': 1e-6, 'ps^2': 1 },
  phononCoupling: { 'fs^2': 1e-6, 'ps^2': 1 },
  tod: { 'fs^3': 1e-9, 'ps^3': 1 },
  energy: {
    ueV: 1e-3,
    meV: 1,
    eV: 1e3,
    Hz: 1e3 / HZ_PER_EV,
    kHz: 1e6 / HZ_PER_EV,
    MHz: 1e9 / HZ_PER_EV,
    GHz: 1e12 / HZ_PER_EV,
    THz: 1e15 / HZ_PER_EV,
  },
  frequency: {
    Hz: 1e-9,
    kHz: 1e-6,
    MHz: 1e-3,
    GHz: 1,
    THz: 1e3,
    ueV: HZ_PER_EV * 1e-15,
    meV: HZ_PER_EV * 1e-12,
    eV: HZ_PER_EV * 1e-9,
  },
  repetition: { Hz: 1e-6, kHz: 1e-3, MHz: 1, GHz: 1e3, THz: 1e6 },
  angle: { deg: Math.PI / 180, rad: 1 },
  area: { pi: Math.PI, rad: 1 },
  rate: { '1/ps': 1, '1/ns': 1e-3, '1/us': 1e-6 },
  rabi: { '1/ps': 1, 'rad/ps': 1, '1/ns': 1e-3, 'rad/ns': 1e-3 },
  temperature: { K: 1, mK: 1e-3 },
  length: { nm: 1e-3, um: 1 },
  pulseEnergy: { aJ: 1e-3, fJ: 1, pJ: 1e3, nJ: 1e6 },
  voltage: { mV: 1, V: 1e3 },
  starkSlope: { 'ueV/mV': 1e-3, 'meV/V': 1e-3, 'ueV/V': 1e-6, 'meV/mV': 1 },
  percent: { '%': 0.01 },
  fraction: { '%': 0.01, '': 1 },
};

const names = Object.keys(dimensions) as Dimension[];

function value(text: string, dimension: Dimension): number {
  const parsed = parseQuantity(text, dimension);
  if (parsed.kind === 'fault') throw new Error(`${text}: got ${parsed.found}; needs ${parsed.wanted}`);
  return parsed.value;
}

describe('units', () => {
  for (const dimension of names) {
    it(`reads every unit of ${dimension}, and no other`, () => {
      for (const [unit, size] of Object.entries(oneOf[dimension])) {
        // Through h to the ten digits of the constants in use.
        expect(Math.abs(value(`1 ${unit}`, dimension) / size - 1), unit).toBeLessThan(1e-9);
      }
      const all = new Set(Object.values(oneOf).flatMap((units) => Object.keys(units)));
      for (const unit of all) {
        if (unit in oneOf[dimension]) continue;
        expect(parseQuantity(`1 ${unit}`, dimension).kind, `1 ${unit} as ${dimension}`).toBe('fault');
      }
    });
  }

  it('gives decimal units the number that is written, to the bit', () => {
    expect(value('925.3 nm', 'length')).toBe(0.9253);
    expect(value('0.1 1/ns', 'rate')).toBe(0.0001);
    expect(value('2.2 %', 'percent')).toBe(0.022);
    expect(value('1.1e3 fs', 'time')).toBe(1.1);
  });

  it('takes both micro signs, superscripts, π, a minus sign and missing spaces', () => {
    expect(value('8 \u00b5eV', 'energy')).toBe(0.008);
    expect(value('8 \u03bceV', 'energy')).toBe(0.008);
    expect(value('3 \u00b5s', 'time')).toBe(3e6);
    expect(value('4 ps\u00b2', 'gdd')).toBe(4);
    expect(value('1.5 \u03c0', 'area')).toBe(1.5 * Math.PI);
    expect(value('\u22128 meV', 'energy')).toBe(-8);
    expect(value('  +5ps ', 'time')).toBe(5);
    expect(Object.is(value('-0 ps', 'time'), 0)).toBe(true);
  });

  it('says when it converts through h', () => {
    // 1 meV is 241.7989242 GHz (CODATA 2018/2022).
    const energy = parseQuantity('241.7989242 GHz', 'energy');
    expect(energy).toMatchObject({ kind: 'value', remark: '241.7989242 GHz converted through h to 1 meV' });
    const frequency = parseQuantity('1 meV', 'frequency');
    expect(frequency).toMatchObject({ remark: '1 meV converted through h to 241.798924 GHz' });
    expect(parseQuantity('1 meV', 'energy')).toMatchObject({ remark: null });
  });

  it.each([
    ['5', 'time', '5 (no unit)', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['5 PS', 'time', '5 PS (unknown unit PS; ps?)', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['5 kg', 'time', '5 kg (unknown unit kg)', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['5 meV', 'time', '5 meV (an energy)', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['5 ps', 'energy', '5 ps (a time)', 'an energy in ueV, meV or eV, such as 2.4 meV'],
    ['1e999 ps', 'time', '1e999 ps (too large)', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['five ps', 'time', 'five ps', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['', 'fraction', 'an empty text', 'a pure number or a percentage, such as 0.65'],
    ['2,5 ps', 'time', '2,5 ps (unknown unit ,5 ps)', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['NaN ps', 'time', 'NaN ps', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['Infinity ps', 'time', 'Infinity ps', 'a time in fs, ps, ns or us, such as 5 ps'],
    ['0x10 ps', 'time', '0x10 ps (unknown unit x10 ps)', 'a time in fs, ps, ns or us, such as 5 ps'],
  ] as const)('refuses %j as %s', (text, dimension, found, wanted) => {
    expect(parseQuantity(text, dimension)).toEqual({ kind: 'fault', found, wanted });
  });

  it('never throws and answers every text at once', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), fc.constantFrom(...names), (text, dimension) => {
        const parsed = parseQuantity(text, dimension);
        if (parsed.kind === 'value') expect(Number.isFinite(parsed.value)).toBe(true);
        else expect(parsed.found.length * parsed.wanted.length).toBeGreaterThan(0);
      }),
      { seed: 11, numRuns: 500 },
    );
    const start = performance.now();
    parseQuantity(`${'1'.repeat(1e6)} ps`, 'time');
    expect(performance.now() - start).toBeLessThan(200);
  });
});

describe('exact text', () => {
  it('reads back to the same bits for every finite number and dimension', () => {
    const numbers = fc.oneof(
      fc.double({ noNaN: true, noDefaultInfinity: true }),
      fc.double({ noNaN: true, min: -1e6, max: 1e6 }),
      fc.integer({ min: -1000, max: 1000 }),
    );
    fc.assert(
      fc.property(numbers, fc.constantFrom(...names), (number, dimension) => {
        const back = value(exactQuantity(number, dimension), dimension);
        expect(Object.is(back, number + 0)).toBe(true);
      }),
      { seed: 12, numRuns: 3000 },
    );
  });

  it.each([
    [0.9253, 'length', '925.3 nm'],
    [1.5 * Math.PI, 'area', '1.5 pi'],
    [Math.PI / 4, 'angle', '45 deg'],
    [0.02, 'percent', '2 %'],
    [1e-7, 'fraction', '1e-7'],
    [0, 'gdd', '0 ps^2'],
    [0.0001, 'rate', '0.1 1/ns'],
    [0.03, 'phononCoupling', '0.03 ps^2'],
    [-8, 'energy', '-8 meV'],
    [0.1 + 0.2, 'time', '300.00000000000004 fs'],
  ] as const)('writes %s as %s: %s', (number, dimension, text) => {
    expect(exactQuantity(number, dimension)).toBe(text);
  });

  it('refuses what is no number', () => {
    expect(() => exactQuantity(Number.NaN, 'time')).toThrow(RangeError);
    expect(() => exactQuantity(Number.POSITIVE_INFINITY, 'area')).toThrow(RangeError);
  });
});

describe('readable text', () => {
  it.each([
    [5, 'time', '5.00 ps'],
    [0.004321, 'time', '4.32 fs'],
    [999.7, 'time', '1.00 ns'],
    [Math.PI, 'area', '1.00 pi'],
    [0.00812, 'energy', '8.12 ueV'],
    [-8.1234, 'energy', '-8.12 meV'],
    [30, 'frequency', '30.0 GHz'],
    [0.6543, 'fraction', '0.654'],
    [1.234e-7, 'fraction', '1.23e-7'],
    [0, 'energy', '0 meV'],
    [12345, 'pulseEnergy', '12.3 pJ'],
    [240, 'time', '240 ps'],
  ] as const)('%s as %s: %s', (number, dimension, text) => {
    expect(formatQuantity(number, dimension)).toBe(text);
  });

  it('reads back within its digits', () => {
    fc.assert(
      fc.property(
        fc.double({ noNaN: true, min: 1e-12, max: 1e12 }),
        fc.constantFrom(...names),
        fc.integer({ min: 1, max: 15 }),
        (number, dimension, digits) => {
          const back = value(formatQuantity(number, dimension, digits), dimension);
          expect(Math.abs(back / number - 1)).toBeLessThanOrEqual(5.001 * 10 ** -digits);
        },
      ),
      { seed: 13, numRuns: 2000 },
    );
  });

  it('gives the number in a named unit', () => {
    expect(inUnit(0.9253, 'length', 'nm')).toBe(925.3);
    expect(inUnit(Math.PI, 'area', 'pi')).toBe(1);
    expect(inUnit(0.02, 'percent', '%')).toBe(2);
    expect(() => inUnit(1, 'time', 'meV')).toThrow('meV is no unit of a time');
  });
});
