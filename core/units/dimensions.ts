import { GHZ_PER_MEV } from './constants.js';

/** How a unit relates to the internal unit of its dimension: a power of ten (exact decimal shift) or a factor. */
export interface Unit {
  readonly name: string;
  /** Internal value = number × 10^shift. Exact: the decimal point of the text is moved before conversion. */
  readonly shift?: number;
  /** Internal value = number × factor, for units that are no power of ten of the internal one. */
  readonly factor?: number;
  /** Set for a unit of another dimension that is converted through h. */
  readonly throughPlanck?: true;
}

/** A physical dimension of the study file. The first unit whose shift is 0 is the internal unit. */
export interface DimensionInfo {
  /** With its article, as messages say it. */
  readonly name: string;
  /** Name of the internal unit; '' for a pure number. */
  readonly internal: string;
  readonly units: readonly Unit[];
  /** Units that readable output chooses from, small to large. */
  readonly display: readonly string[];
  /** An example in messages. */
  readonly example: string;
  /** True when a number without a unit is allowed. */
  readonly bare?: true;
}

const decimal = (shifts: Readonly<Record<string, number>>): Unit[] =>
  Object.entries(shifts).map(([name, shift]) => ({ name, shift }));

/** Energies as ordinary frequencies E/h and back. */
const frequencyAsEnergy: Unit[] = Object.entries({ Hz: 1e-9, kHz: 1e-6, MHz: 1e-3, GHz: 1, THz: 1e3 }).map(
  ([name, gigahertz]) => ({ name, factor: gigahertz / GHZ_PER_MEV, throughPlanck: true }),
);
const energyAsFrequency: Unit[] = Object.entries({ ueV: 1e-3, meV: 1, eV: 1e3 }).map(([name, meV]) => ({
  name,
  factor: meV * GHZ_PER_MEV,
  throughPlanck: true,
}));

/** Every dimension. Internal units: ps, ps², ps³, meV, GHz, MHz, rad, 1/ps, K, µm, fJ, mV, meV/mV, and pure numbers. */
export const dimensions = {
  time: {
    name: 'a time',
    internal: 'ps',
    units: decimal({ fs: -3, ps: 0, ns: 3, us: 6 }),
    display: ['fs', 'ps', 'ns', 'us'],
    example: '5 ps',
  },
  gdd: {
    name: 'a group-delay dispersion',
    internal: 'ps^2',
    units: decimal({ 'fs^2': -6, 'ps^2': 0 }),
    display: ['fs^2', 'ps^2'],
    example: '40 ps^2',
  },
  phononCoupling: {
    name: 'a phonon coupling',
    internal: 'ps^2',
    units: decimal({ 'fs^2': -6, 'ps^2': 0 }),
    display: ['ps^2'],
    example: '0.03 ps^2',
  },
  tod: {
    name: 'a third-order dispersion',
    internal: 'ps^3',
    units: decimal({ 'fs^3': -9, 'ps^3': 0 }),
    display: ['fs^3', 'ps^3'],
    example: '5 ps^3',
  },
  energy: {
    name: 'an energy',
    internal: 'meV',
    units: [...decimal({ ueV: -3, meV: 0, eV: 3 }), ...frequencyAsEnergy],
    display: ['ueV', 'meV', 'eV'],
    example: '2.4 meV',
  },
  frequency: {
    name: 'a frequency',
    internal: 'GHz',
    units: [...decimal({ Hz: -9, kHz: -6, MHz: -3, GHz: 0, THz: 3 }), ...energyAsFrequency],
    display: ['Hz', 'kHz', 'MHz', 'GHz', 'THz'],
    example: '30 GHz',
  },
  repetition: {
    name: 'a repetition rate',
    internal: 'MHz',
    units: decimal({ Hz: -6, kHz: -3, MHz: 0, GHz: 3, THz: 6 }),
    display: ['Hz', 'kHz', 'MHz', 'GHz'],
    example: '76 MHz',
  },
  angle: {
    name: 'an angle',
    internal: 'rad',
    units: [{ name: 'deg', factor: Math.PI / 180 }, ...decimal({ rad: 0 })],
    display: ['deg'],
    example: '45 deg',
  },
  area: {
    name: 'a pulse area',
    internal: 'rad',
    units: [{ name: 'pi', factor: Math.PI }, ...decimal({ rad: 0 })],
    display: ['pi'],
    example: '1.5 pi',
  },
  rate: {
    name: 'a rate',
    internal: '1/ps',
    units: decimal({ '1/ps': 0, '1/ns': -3, '1/us': -6 }),
    display: ['1/ns', '1/ps'],
    example: '0.1 1/ns',
  },
  /** Angular: the radian counts as a pure number. */
  rabi: {
    name: 'a Rabi frequency',
    internal: '1/ps',
    units: decimal({ '1/ps': 0, 'rad/ps': 0, '1/ns': -3, 'rad/ns': -3 }),
    display: ['1/ps'],
    example: '0.4 1/ps',
  },
  temperature: {
    name: 'a temperature',
    internal: 'K',
    units: decimal({ K: 0, mK: -3 }),
    display: ['mK', 'K'],
    example: '4 K',
  },
  length: {
    name: 'a length',
    internal: 'um',
    units: decimal({ nm: -3, um: 0 }),
    display: ['nm'],
    example: '925 nm',
  },
  pulseEnergy: {
    name: 'a pulse energy',
    internal: 'fJ',
    units: decimal({ aJ: -3, fJ: 0, pJ: 3, nJ: 6 }),
    display: ['aJ', 'fJ', 'pJ', 'nJ'],
    example: '12 fJ',
  },
  voltage: {
    name: 'a voltage',
    internal: 'mV',
    units: decimal({ mV: 0, V: 3 }),
    display: ['mV', 'V'],
    example: '200 mV',
  },
  starkSlope: {
    name: 'a Stark slope',
    internal: 'meV/mV',
    units: decimal({ 'ueV/mV': -3, 'meV/V': -3, 'ueV/V': -6, 'meV/mV': 0 }),
    display: ['ueV/V', 'ueV/mV', 'meV/mV'],
    example: '5 ueV/mV',
  },
  percent: {
    name: 'a percentage',
    internal: '',
    units: decimal({ '%': -2 }),
    display: ['%'],
    example: '2 %',
  },
  fraction: {
    name: 'a pure number or a percentage',
    internal: '',
    units: decimal({ '%': -2 }),
    display: [''],
    example: '0.65',
    bare: true,
  },
} as const satisfies Record<string, DimensionInfo>;

export type Dimension = keyof typeof dimensions;

/** The description of a dimension with its widest type. */
export function dimensionInfo(dimension: Dimension): DimensionInfo {
  return dimensions[dimension];
}

/** `ps, ns or us`. */
export function joinNames(names: readonly string[]): string {
  if (names.length < 2) return names.join('');
  return `${names.slice(0, -1).join(', ')} or ${names[names.length - 1]}`;
}

/** Names of the units of a dimension, those converted through h left out. */
export function unitNames(dimension: Dimension): string[] {
  return dimensionInfo(dimension)
    .units.filter((u) => !u.throughPlanck)
    .map((u) => u.name);
}

/** `a time in fs, ps, ns or us, such as 5 ps`. */
export function describeDimension(dimension: Dimension): string {
  const info = dimensionInfo(dimension);
  if (info.bare) return `${info.name}, such as ${info.example}`;
  return `${info.name} in ${joinNames(unitNames(dimension))}, such as ${info.example}`;
}
