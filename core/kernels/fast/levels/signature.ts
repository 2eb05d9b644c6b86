import type { CountRequest } from '../../count.js';

/** Frequencies are rounded to this (1/ps), so that one emitter gives the same numbers in every frame. */
const GRAIN = 2 ** -42;
export const rounded = (x: number): number => Math.round(x / GRAIN) * GRAIN;

/** What a layout depends on besides the pulse. */
export interface Ingredients {
  readonly scheme: CountRequest['scheme'];
  readonly dipoles: CountRequest['dipoles'];
  readonly thinning: number | null;
  readonly filter: { readonly kappa: number; readonly order: number } | null;
  /** Filter centre minus the collected line, 1/ps. */
  readonly offset: number;
  /** Frame in which the collected line stands still (the exciton line where nothing is filtered), 1/ps. */
  readonly frame: number;
  /** Parts of the level energies that count as constant (`unevenEnergies`), 1/ps. */
  readonly uneven: readonly number[];
  /** Drive components that ever differ from zero. */
  readonly used: readonly boolean[];
  readonly wanted: readonly string[] | null;
}

/** All numbers and names that the ingredients hold, as one list that can be compared cheaply. */
function listed(x: Ingredients): (number | string)[] {
  const { scheme, dipoles, thinning, filter } = x;
  const out: (number | string)[] = [scheme.projection, scheme.dephasing, thinning ?? -1, x.offset, x.frame];
  if (filter) out.push(filter.kappa, filter.order);
  else out.push('emitted');
  for (const l of scheme.levels) out.push(l.excitons, l.offset);
  for (const t of scheme.transitions) out.push(t.lower, t.upper, t.weightH, t.weightV);
  for (const d of scheme.decays) out.push(d.from, d.to, d.rate, d.line, d.polarization);
  for (const d of dipoles) {
    out.push('dipole');
    for (let k = 0; k < d.re.length; k++) out.push(d.re[k], d.im[k]);
  }
  out.push(...x.uneven);
  for (const used of x.used) out.push(used ? 1 : 0);
  if (x.wanted) out.push('wanted', ...x.wanted);
  return out;
}

/**
 * A bounded memo by content: a value depends on nothing but its ingredients, so whether it is found or made again cannot
 * change any result. The least recently used goes first. Comparing lists of numbers takes a tenth of the time of a
 * text key.
 */
export class IngredientMemo<T> {
  private readonly held: { readonly list: readonly (number | string)[]; readonly value: T }[] = [];

  constructor(private readonly most: number) {}

  get(ingredients: Ingredients, make: () => T): T {
    const list = listed(ingredients);
    const at = this.held.findIndex((entry) => same(entry.list, list));
    const entry = at < 0 ? { list, value: make() } : this.held[at];
    if (at !== 0) {
      if (at > 0) this.held.splice(at, 1);
      this.held.unshift(entry);
      if (this.held.length > this.most) this.held.pop();
    }
    return entry.value;
  }
}

function same(a: readonly (number | string)[], b: readonly (number | string)[]): boolean {
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return false;
  return true;
}
