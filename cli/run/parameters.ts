import { type Dimension, dimensionInfo, formatQuantity, inUnit } from '../../core/index.js';
import { keyEntries, leafAt } from '../study/index.js';

/** Units of tables and axes where another than the internal one is what people say. */
const SPOKEN: Partial<Record<Dimension, string>> = { area: 'pi', angle: 'deg', length: 'nm', percent: '%' };

const known = new Map<string, Dimension | null>();

/** Dimension of the quantity at a path of the study file, such as `pulse.tones.0.fwhm`; null when no quantity stands there. */
export function dimensionAt(path: string): Dimension | null {
  let dimension = known.get(path);
  if (dimension === undefined) {
    const rule = leafAt(path)?.rule;
    dimension = rule?.kind === 'quantity' ? rule.dimension : null;
    known.set(path, dimension);
  }
  return dimension;
}

function dimensionOf(path: string): Dimension {
  const dimension = dimensionAt(path);
  if (dimension === null) throw new Error(`${path} is no quantity of a study`);
  return dimension;
}

/** Unit in which tables and axes give the quantity at a path; empty for pure numbers. */
export function unitOf(path: string): string {
  const dimension = dimensionOf(path);
  return SPOKEN[dimension] ?? dimensionInfo(dimension).internal;
}

/** Column name of a parameter: `pulse.tones.0.fwhm [ps]`. */
export function columnOf(path: string): string {
  const unit = unitOf(path);
  return unit === '' ? path : `${path} [${unit}]`;
}

/** A parameter value (internal units) in the unit of its column. */
export function inColumn(value: number, path: string): number {
  const unit = unitOf(path);
  return unit === '' ? value : inUnit(value, dimensionOf(path), unit);
}

/** A parameter value with unit, three significant digits. */
export function readable(value: number, path: string): string {
  return formatQuantity(value, dimensionOf(path));
}

/** Every path at which a quantity can stand in a study with that many tones. */
export function quantityPaths(tones: number): string[] {
  const patterns = keyEntries
    .filter(({ key }) => key.kind === 'leaf' && key.rule.kind === 'quantity')
    .map(({ pattern }) => pattern);
  return patterns.flatMap((pattern) =>
    pattern.includes('[]')
      ? Array.from({ length: tones }, (_, i) => pattern.replace('[]', `.${i}`))
      : [pattern],
  );
}
