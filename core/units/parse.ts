import { type Dimension, describeDimension, dimensionInfo, dimensions, type Unit } from './dimensions.js';

/** What a text with a unit came to: plain data, never an exception. */
export type ParsedQuantity =
  | {
      readonly kind: 'value';
      /** In the internal unit of the dimension; finite. */
      readonly value: number;
      /** What was done to the value that its author should know, or null. */
      readonly remark: string | null;
    }
  | { readonly kind: 'fault'; readonly found: string; readonly wanted: string };

const QUANTITY = /^([+\-\u2212]?)((?:\d+\.?\d*|\.\d+))(?:[eE]([+-]?\d+))?\s*(.*)$/su;
/** Longer texts are no quantity; also keeps messages readable. */
const LONGEST = 80;

/** The two code points of the micro sign stand for u; superscripts, π and ° for their ASCII forms. */
export function normalizeUnit(text: string): string {
  return text
    .replace(/[\u00b5\u03bc]/g, 'u')
    .replace(/\u00b2/g, '^2')
    .replace(/\u00b3/g, '^3')
    .replace(/\u03c0/g, 'pi')
    .replace(/\u00b0/g, 'deg')
    .trim();
}

/** Text as messages quote it: cut to a readable length, control characters made visible. */
export function quoteFound(text: string): string {
  const cut = text.length > LONGEST ? `${text.slice(0, LONGEST)}…` : text;
  return cut.replace(/[\p{Cc}\u2028\u2029\ufeff]/gu, (c) => {
    return `\\u${c.charCodeAt(0).toString(16).padStart(4, '0')}`;
  });
}

/** `5 ps` → 5, `2 %` → 0.02, `2 ns` → 2000: a number and a unit of the dimension, into its internal unit. */
export function parseQuantity(text: string, dimension: Dimension): ParsedQuantity {
  const info = dimensionInfo(dimension);
  const wanted = describeDimension(dimension);
  const quoted = quoteFound(text) === '' ? 'an empty text' : quoteFound(text);
  const match = text.length <= LONGEST ? QUANTITY.exec(text.trim()) : null;
  if (!match) return { kind: 'fault', found: quoted, wanted };
  const [, sign, digits, exponent, rest] = match;
  const name = normalizeUnit(rest);
  const unit = name === '' && info.bare ? BARE : info.units.find((u) => u.name === name);
  if (!unit) return { kind: 'fault', found: `${quoted} (${whatIs(name)})`, wanted };
  const value = internalValue(
    `${sign === '' || sign === '+' ? '' : '-'}${digits}`,
    Number(exponent ?? 0),
    unit,
  );
  if (!Number.isFinite(value)) return { kind: 'fault', found: `${quoted} (too large)`, wanted };
  return {
    kind: 'value',
    value,
    remark: unit.throughPlanck ? throughPlanck(quoted, value, info.internal) : null,
  };
}

const BARE: Unit = { name: '', shift: 0 };

/** Moving the decimal point in the text keeps `925.3 nm` and `0.9253 um` the same number to the bit. */
function internalValue(digits: string, exponent: number, unit: Unit): number {
  const shifted = Number(`${digits}e${exponent + (unit.shift ?? 0)}`);
  // Adding zero turns −0 into 0.
  return (unit.factor === undefined ? shifted : shifted * unit.factor) + 0;
}

function throughPlanck(quoted: string, value: number, internal: string): string {
  return `${quoted} converted through h to ${Number(value.toPrecision(9))} ${internal}`;
}

function whatIs(unit: string): string {
  if (unit === '') return 'no unit';
  for (const info of Object.values(dimensions)) {
    if (info.units.some((u: Unit) => u.name === unit && !u.throughPlanck)) return info.name;
  }
  const all = new Set(Object.values(dimensions).flatMap((info) => info.units.map((u: Unit) => u.name)));
  const meant = [...all].filter((name) => name.toLowerCase() === unit.toLowerCase());
  const hint = meant.length > 0 ? `; ${meant.join(', ')}?` : '';
  return `unknown unit ${quoteFound(unit)}${hint}`;
}
