import type { Scalar } from './derivatives/formula.js';
import type { PulseFigures } from './figures.js';

/** What has to be found of a design; everything else may come out as NaN. */
export interface Wanted {
  /** Targets of the emitted count; null for all. */
  readonly emitted: readonly string[] | null;
  /** Behind a filter: probabilities, which need a series of moments, and not only ⟨n⟩ and ⟨n(n−1)⟩. */
  readonly series: boolean;
  readonly leakage: boolean;
  /** Figures of the pulse; null for all. */
  readonly pulse: ReadonlySet<keyof PulseFigures> | null;
}

const EVERYTHING: Wanted = { emitted: null, series: true, leakage: true, pulse: null };

/** How the count of a design reaches its figures. */
export interface Path {
  readonly filtered: boolean;
  /** Photons are lost behind the emitter, so that their count is another one. */
  readonly thinned: boolean;
}

/** Targets of the emitted count behind each number of a count distribution. */
const EMITTED: Readonly<Record<string, string>> = {
  mean: 'mean',
  factorial2: 'factorial2',
  'p.0': 'p0',
  'p.1': 'p1',
  'p.2': 'p2',
  'p.3': 'p3',
  multiphoton: 'multiphoton',
};
const MEANS: ReadonlySet<string> = new Set(['mean', 'factorial2']);
const WHOLE = ['p0', 'p1', 'multiphoton'];
const THINNED = ['thinned0', 'thinned1', 'thinnedMultiphoton'];

/** What some figures need of a design, found once for every kind of path. */
export class WantedFigures {
  readonly #scalars: ReadonlySet<Scalar> | null;
  readonly #found: (Wanted | undefined)[] = [];

  /** @param scalars null for everything */
  constructor(scalars: ReadonlySet<Scalar> | null) {
    this.#scalars = scalars;
  }

  of(path: Path): Wanted {
    if (this.#scalars === null) return EVERYTHING;
    const kind = (path.filtered ? 2 : 0) + (path.thinned ? 1 : 0);
    const wanted = this.#found[kind] ?? neededFor(this.#scalars, path);
    this.#found[kind] = wanted;
    return wanted;
  }
}

export const ALL_FIGURES = new WantedFigures(null);

/** Populations are those of the emitted count. */
function neededFor(scalars: ReadonlySet<Scalar>, { filtered, thinned }: Path): Wanted {
  const emitted = new Set<string>();
  const pulse = new Set<keyof PulseFigures>();
  let [series, leakage, populations] = [false, false, false];
  for (const scalar of scalars) {
    const dot = scalar.indexOf('.');
    const [basis, name] = dot < 0 ? [scalar, ''] : [scalar.slice(0, dot), scalar.slice(dot + 1)];
    if (basis === 'collected' || basis === 'leakage') leakage = true;
    if (basis === 'leakage') continue;
    if (basis === 'pulse') pulse.add(name as keyof PulseFigures);
    else if (basis === 'populations') populations = true;
    else if (basis === 'emitted') emitted.add(EMITTED[name]);
    else if (filtered) series ||= !MEANS.has(name);
    // A probability with leaked light needs those below it.
    else for (const target of MEANS.has(name) ? [name] : thinned ? THINNED : WHOLE) emitted.add(target);
  }
  return { emitted: populations ? null : [...emitted], series, leakage, pulse };
}
