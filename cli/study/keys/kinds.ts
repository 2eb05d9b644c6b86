import { type Dimension, exactQuantity, parseQuantity } from '../../../core/index.js';

/** Allowed numbers, in internal units. */
export interface Bounds {
  readonly above?: number;
  readonly from?: number;
  readonly to?: number;
  readonly not?: number;
}

export type Rule =
  | {
      readonly kind: 'quantity';
      readonly dimension: Dimension;
      readonly bounds: Bounds;
      /** True where a free parameter or a tie may stand. */
      readonly free: boolean;
    }
  /** Two quantities, the lower one first. */
  | { readonly kind: 'interval'; readonly dimension: Dimension }
  | { readonly kind: 'integer'; readonly from: number; readonly to: number }
  | { readonly kind: 'choice'; readonly values: readonly string[] }
  | { readonly kind: 'text'; readonly longest: number }
  | { readonly kind: 'version'; readonly version: number };

/** `required`: a fault when left out; `value`: what stands for it; `none`: null stands for it. */
export type Presence<T> =
  | { readonly kind: 'required' }
  | { readonly kind: 'value'; readonly value: T }
  | { readonly kind: 'none' };

export interface Leaf<T> {
  readonly kind: 'leaf';
  readonly rule: Rule;
  readonly presence: Presence<T>;
  readonly help: string;
  /** Set where the key is only for emitters that have this. */
  readonly only?: 'biexciton';
}

/** The same key, only for emitters with a biexciton. */
export const biexcitonOnly = <T>(leaf: Leaf<T>): Leaf<T> => ({ ...leaf, only: 'biexciton' });

export interface Section<K extends Keys = Keys, N extends boolean = boolean> {
  readonly kind: 'section';
  readonly keys: K;
  /** `none`: null stands for it when left out; `empty`: an empty one does. */
  readonly presence: 'required' | 'empty' | 'none';
  readonly nullable: N;
  readonly help: string;
}

export interface List<S extends Section = Section> {
  readonly kind: 'list';
  readonly item: S;
  readonly longest: number;
  readonly help: string;
}

// biome-ignore lint/suspicious/noExplicitAny: the values of leaves are of any type here, and known again in ReadOf
export type Key = Leaf<any> | Section | List;
export type Keys = { readonly [name: string]: Key };

/** Keys of a study file are in snake case, fields of a design in camel case. */
type Camel<S extends string> = S extends `${infer A}_${infer B}` ? `${A}${Capitalize<Camel<B>>}` : S;
export const camelCase = (key: string): string =>
  key.replace(/_([a-z])/g, (_, letter: string) => letter.toUpperCase());

export const snakeCase = (field: string): string => field.replace(/[A-Z]/g, (c) => `_${c.toLowerCase()}`);

/** What reading a key gives: undefined where it is faulty. */
export type ReadOf<K> =
  K extends Leaf<infer T>
    ? T | undefined
    : K extends List<infer S>
      ? readonly NonNullable<ReadOf<S>>[] | undefined
      : K extends Section<infer Inner, infer N>
        ?
            | { readonly [P in keyof Inner as Camel<P & string>]: ReadOf<Inner[P]> }
            | (N extends true ? null : never)
            | undefined
        : never;

interface QuantityOptions {
  readonly bounds?: Bounds;
  readonly free?: true;
  /** As text with its unit. */
  readonly default?: string;
}

export function quantity(dimension: Dimension, help: string, options: QuantityOptions = {}): Leaf<number> {
  const rule = quantityRule(dimension, options);
  if (options.default === undefined) return { kind: 'leaf', rule, presence: { kind: 'required' }, help };
  const parsed = parseQuantity(options.default, dimension);
  if (parsed.kind === 'fault') throw new Error(`default ${parsed.found}; needs ${parsed.wanted}`);
  return { kind: 'leaf', rule, presence: { kind: 'value', value: parsed.value }, help };
}

export function optionalQuantity(
  dimension: Dimension,
  help: string,
  options: { readonly bounds?: Bounds } = {},
): Leaf<number | null> {
  return { kind: 'leaf', rule: quantityRule(dimension, options), presence: { kind: 'none' }, help };
}

const quantityRule = (dimension: Dimension, { bounds, free }: QuantityOptions): Rule => ({
  kind: 'quantity',
  dimension,
  bounds: bounds ?? {},
  free: free ?? false,
});

/** Value of a key that takes `[lower, upper]`, in internal units. */
export interface Interval {
  readonly from: number;
  readonly to: number;
}

export function interval(dimension: Dimension, help: string): Leaf<Interval> {
  return { kind: 'leaf', rule: { kind: 'interval', dimension }, presence: { kind: 'required' }, help };
}

export function choice<const V extends string>(
  help: string,
  values: readonly V[],
  fallback: NoInfer<V> | null,
): Leaf<V> {
  const presence: Presence<V> = fallback === null ? { kind: 'required' } : { kind: 'value', value: fallback };
  return { kind: 'leaf', rule: { kind: 'choice', values }, presence, help };
}

export function integer(help: string, from: number, to: number, fallback: number): Leaf<number> {
  return {
    kind: 'leaf',
    rule: { kind: 'integer', from, to },
    presence: { kind: 'value', value: fallback },
    help,
  };
}

export function section<K extends Keys>(
  help: string,
  presence: 'required' | 'empty',
  keys: K,
): Section<K, false> {
  return { kind: 'section', keys, presence, nullable: false, help };
}

export function optionalSection<K extends Keys>(help: string, keys: K): Section<K, true> {
  return { kind: 'section', keys, presence: 'none', nullable: true, help };
}

/** `more than 0 ps`, `0 K or more`, `more than 0 and at most 1`; empty without bounds. */
export function describeBounds(bounds: Bounds, dimension: Dimension): string {
  const text = (value: number) => exactQuantity(value, dimension);
  const parts: string[] = [];
  if (bounds.above !== undefined) parts.push(`more than ${text(bounds.above)}`);
  if (bounds.from !== undefined) parts.push(`at least ${text(bounds.from)}`);
  if (bounds.to !== undefined) parts.push(`at most ${text(bounds.to)}`);
  if (bounds.not !== undefined) parts.push(`any value but ${text(bounds.not)}`);
  return parts.join(' and ');
}

export function withinBounds(value: number, bounds: Bounds): boolean {
  if (bounds.above !== undefined && !(value > bounds.above)) return false;
  if (bounds.from !== undefined && !(value >= bounds.from)) return false;
  if (bounds.to !== undefined && !(value <= bounds.to)) return false;
  return !(bounds.not !== undefined && value === bounds.not);
}
