import { type Dimension, dimensionInfo, type Unit } from './dimensions.js';
import { parseQuantity } from './parse.js';

/** Readable text: the largest display unit in which the number is at least 1, with that many significant digits. */
export function formatQuantity(value: number, dimension: Dimension, significantDigits = 3): string {
  const info = dimensionInfo(dimension);
  const candidates = info.display.map((name) => info.units.find((u) => u.name === name) ?? BARE);
  const scaled = (unit: Unit) => value / scaleOf(unit);
  const rounded = (unit: Unit) => Math.abs(Number(scaled(unit).toPrecision(significantDigits)));
  let unit = candidates.find((u) => u.name === info.internal) ?? candidates[0];
  if (value !== 0 && Number.isFinite(value)) {
    unit = candidates.findLast((u) => rounded(u) >= 1) ?? candidates[0];
  }
  return withUnit(plainDigits(scaled(unit), significantDigits), unit.name);
}

/** The number of a quantity in one named unit of its dimension. Throws when the dimension has no such unit. */
export function inUnit(value: number, dimension: Dimension, unitName: string): number {
  const unit = dimensionInfo(dimension).units.find((u) => u.name === unitName);
  if (!unit) throw new RangeError(`${unitName} is no unit of ${dimensionInfo(dimension).name}`);
  return unit.factor === undefined ? shifted(value, -(unit.shift ?? 0)) : value / unit.factor;
}

/**
 * The shortest text that `parseQuantity` turns into exactly this number, bit for bit: in the readable unit if that can
 * be had, else in the internal unit, which always can. Throws for a number that is not finite.
 */
export function exactQuantity(value: number, dimension: Dimension): string {
  if (!Number.isFinite(value))
    throw new RangeError(`${value} cannot be written as ${dimensionInfo(dimension).name}`);
  const info = dimensionInfo(dimension);
  const readable = formatQuantity(value, dimension).split(' ').slice(1).join(' ');
  for (const unit of info.units.filter((u) => u.name === readable)) {
    const text = exactIn(value, unit, dimension);
    if (text !== null) return text;
  }
  const internal = info.units.find((u) => u.shift === 0) ?? info.units.find((u) => u.shift !== undefined);
  if (info.bare) return decimalText(value, 0);
  return withUnit(decimalText(value, -((internal as Unit).shift ?? 0)), (internal as Unit).name);
}

const BARE: Unit = { name: '', shift: 0 };

function exactIn(value: number, unit: Unit, dimension: Dimension): string | null {
  if (unit.shift !== undefined) return withUnit(decimalText(value, -unit.shift), unit.name);
  const quotient = value / (unit.factor as number);
  // The quotient is rounded, so a neighbour may be the one that multiplies back.
  const steps = [0, 1, -1, 2, -2].map((n) => quotient * (1 + n * Number.EPSILON));
  for (const digits of [3, 6, 9, 12, 15]) steps.unshift(Number(quotient.toPrecision(digits)));
  for (const candidate of steps.reverse().sort((a, b) => String(a).length - String(b).length)) {
    const text = withUnit(decimalText(candidate, 0), unit.name);
    const back = parseQuantity(text, dimension);
    if (back.kind === 'value' && back.value === value) return text;
  }
  return null;
}

const scaleOf = (unit: Unit): number => unit.factor ?? 10 ** (unit.shift ?? 0);
const withUnit = (digits: string, unit: string): string => (unit === '' ? digits : `${digits} ${unit}`);
const shifted = (value: number, shift: number): number => Number(decimalText(value, shift));

/** The shortest decimal text of value × 10^shift that reads back as value when shifted the other way. */
function decimalText(value: number, shift: number): string {
  const [mantissa, exponent = '0'] = String(value).split('e');
  const [whole, fraction = ''] = mantissa.replace('-', '').split('.');
  const digits = (whole + fraction).replace(/^0+(?=\d)/, '');
  const power = Number(exponent) - fraction.length + shift;
  const sign = value < 0 ? '-' : '';
  return sign + placePoint(digits, power);
}

/** `digits` × 10^power in plain notation, or with an exponent when that would be unreadable. */
function placePoint(digits: string, power: number): string {
  if (/^0+$/.test(digits)) return '0';
  const trimmed = digits.replace(/0+$/, '');
  const exponent = power + digits.length - trimmed.length;
  const magnitude = trimmed.length + exponent;
  if (magnitude > 21 || magnitude < -3) {
    const tail = trimmed.slice(1);
    return `${trimmed[0]}${tail ? `.${tail}` : ''}e${magnitude - 1}`;
  }
  if (exponent >= 0) return trimmed + '0'.repeat(exponent);
  if (magnitude > 0) return `${trimmed.slice(0, magnitude)}.${trimmed.slice(magnitude)}`;
  return `0.${'0'.repeat(-magnitude)}${trimmed}`;
}

/** Significant digits without an exponent where the plain number stays readable. */
function plainDigits(value: number, significantDigits: number): string {
  if (value === 0) return '0';
  const text = value.toPrecision(significantDigits);
  const size = Math.abs(Number(text));
  if (!text.includes('e') || size >= 1e6 || size < 1e-4) return text;
  return String(Number(text));
}
