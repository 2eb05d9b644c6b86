import type { Pole } from './fit.js';

/** One auxiliary operator of the hierarchy: how often each exponential of the bath has been taken. */
export interface Storey {
  readonly counts: readonly number[];
  /** Index of the real lane that holds its Hermitian part X; Y follows at +1 unless the operator is its own adjoint. */
  readonly lane: number;
  readonly hermitian: boolean;
  /** Σ n ν, 1/ps. */
  readonly decay: readonly [re: number, im: number];
}

/** to += up·(−i[S, ·]) + scale·(½{S, ·}) of a real lane. */
export interface StoreyLink {
  readonly from: number;
  readonly to: number;
  readonly commutator: number;
  readonly anticommutator: number;
}

/**
 * The auxiliary operators σ_n of the hierarchical equations of motion (Tanimura, J. Phys. Soc. Jpn. 75, 082001 (2006)) over
 * one set of exponentials that serves C and C* alike, n_k counting the k-th:
 *   dσ_n/dt = Lσ_n − (Σ n_kν_k)σ_n − i Σ √((n_k+1)s_k)[S, σ_{n+e_k}] − i Σ √(n_k/s_k)(c_k S σ_{n−e_k} − c'_k σ_{n−e_k} S),
 * with C = Σ c_k e^{−ν_k t}, C* = Σ c'_k e^{−ν_k t} and the scaling of Shi et al., J. Chem. Phys. 130, 084105 (2009). For a
 * Hermitian root σ_n† = σ_n̄, n̄ with conjugate exponentials exchanged: one of each pair is stored, as X + iY.
 */
export interface Tower {
  readonly storeys: readonly Storey[];
  /** Real lanes. */
  readonly lanes: number;
  readonly links: readonly StoreyLink[];
  /** Decay of a lane into itself and into the other half of its storey. */
  readonly damping: Float64Array;
  /** lane ↦ [partner, factor]: dX gains factor · Y. */
  readonly turns: readonly { readonly from: number; readonly to: number; readonly factor: number }[];
  /** Number of auxiliary operators, conjugate ones counted apart. */
  readonly operators: number;
  /** Largest |Σ n ν|, 1/ps: bounds the step of an explicit method. */
  readonly fastest: number;
}

/**
 * @param excitons largest exciton number of a level, S
 * @param least smallest weight Π (S√s_k/|ν_k|)^{n_k}/√n_k! of an auxiliary operator, about its size in a driven emitter;
 *   lighter ones are left out (the filtering of Shi et al., done beforehand)
 */
export function buildTower(poles: readonly Pole[], depth: number, excitons: number, least: number): Tower {
  const all = compositions(poles.length, depth).filter(
    (counts) => weightOf(poles, counts, excitons) >= least,
  );
  const index = new Map<string, { storey: number; conjugate: boolean }>();
  const storeys: Storey[] = [];
  let lanes = 0;
  for (const counts of all) {
    const mirrored = poles.map((pole) => counts[pole.partner]);
    const key = counts.join();
    const other = mirrored.join();
    if (index.has(key)) continue;
    const hermitian = key === other;
    const decay = [
      poles.reduce((s, pole, k) => s + counts[k] * pole.re, 0),
      poles.reduce((s, pole, k) => s + counts[k] * pole.im, 0),
    ] as const;
    index.set(key, { storey: storeys.length, conjugate: false });
    if (!hermitian) index.set(other, { storey: storeys.length, conjugate: true });
    storeys.push({ counts, lane: lanes, hermitian, decay });
    lanes += hermitian ? 1 : 2;
  }
  const damping = new Float64Array(lanes);
  const turns: { from: number; to: number; factor: number }[] = [];
  for (const s of storeys) {
    damping[s.lane] = s.decay[0];
    if (s.hermitian) continue;
    damping[s.lane + 1] = s.decay[0];
    if (s.decay[1] === 0) continue;
    turns.push({ from: s.lane + 1, to: s.lane, factor: s.decay[1] });
    turns.push({ from: s.lane, to: s.lane + 1, factor: -s.decay[1] });
  }
  return {
    storeys,
    lanes,
    links: linksOf(poles, storeys, index),
    damping,
    turns,
    operators: all.length,
    fastest: Math.max(...storeys.map((s) => Math.hypot(...s.decay))),
  };
}

/** Every list of `length` whole numbers with a sum of at most `most`, lowest sums first. */
function compositions(length: number, most: number): number[][] {
  const out: number[][] = [];
  const fill = (at: number, left: number, counts: number[]): void => {
    if (at === length - 1) {
      out.push([...counts, left]);
      return;
    }
    for (let n = left; n >= 0; n--) fill(at + 1, left - n, [...counts, n]);
  };
  for (let sum = 0; sum <= most; sum++) fill(0, sum, []);
  return out;
}

type Found = { storey: number; conjugate: boolean };

function linksOf(
  poles: readonly Pole[],
  storeys: readonly Storey[],
  index: ReadonlyMap<string, Found>,
): StoreyLink[] {
  const links: StoreyLink[] = [];
  for (const to of storeys) {
    poles.forEach((pole, k) => {
      const s = scaleOf(pole);
      const up = index.get(moved(to.counts, k, 1));
      if (up)
        addLink(links, storeys[up.storey], up.conjugate, to, Math.sqrt((to.counts[k] + 1) * s), 0, 0, 0);
      if (to.counts[k] === 0) return;
      const down = index.get(moved(to.counts, k, -1));
      if (!down) return;
      const size = Math.sqrt(to.counts[k] / s);
      const [cr, ci] = pole.amplitude;
      const [dr, di] = pole.conjugate;
      // −i(c Sσ − c' σS) = ½(c + c')·(−i[S, σ]) − i(c − c')·½{S, σ}
      addLink(
        links,
        storeys[down.storey],
        down.conjugate,
        to,
        (size * (cr + dr)) / 2,
        (size * (ci + di)) / 2,
        size * (ci - di),
        -size * (cr - dr),
      );
    });
  }
  return mergeLinks(links);
}

function weightOf(poles: readonly Pole[], counts: readonly number[], excitons: number): number {
  return poles.reduce((product, pole, k) => {
    let weight = product;
    const ratio = (excitons * Math.sqrt(scaleOf(pole))) / Math.hypot(pole.re, pole.im);
    for (let n = 1; n <= counts[k]; n++) weight *= ratio / Math.sqrt(n);
    return weight;
  }, 1);
}

function scaleOf(pole: Pole): number {
  return (Math.hypot(...pole.amplitude) + Math.hypot(...pole.conjugate)) / 2;
}

function moved(counts: readonly number[], k: number, by: number): string {
  return counts.map((n, i) => (i === k ? n + by : n)).join();
}

/** Complex factors β of −i[S, ·] and α of ½{S, ·}, on X ± iY of the source and X + iY of the target. */
function addLink(
  links: StoreyLink[],
  from: Storey,
  conjugate: boolean,
  to: Storey,
  betaRe: number,
  betaIm: number,
  alphaRe: number,
  alphaIm: number,
): void {
  const sign = conjugate ? -1 : 1;
  const push = (a: number, b: number, commutator: number, anticommutator: number): void => {
    if (commutator !== 0 || anticommutator !== 0) links.push({ from: a, to: b, commutator, anticommutator });
  };
  push(from.lane, to.lane, betaRe, alphaRe);
  if (!from.hermitian) push(from.lane + 1, to.lane, -sign * betaIm, -sign * alphaIm);
  if (to.hermitian) return;
  push(from.lane, to.lane + 1, betaIm, alphaIm);
  if (!from.hermitian) push(from.lane + 1, to.lane + 1, sign * betaRe, sign * alphaRe);
}

function mergeLinks(links: readonly StoreyLink[]): StoreyLink[] {
  const merged = new Map<string, StoreyLink>();
  for (const link of links) {
    const key = `${link.from}>${link.to}`;
    const known = merged.get(key);
    merged.set(
      key,
      known
        ? {
            ...link,
            commutator: link.commutator + known.commutator,
            anticommutator: link.anticommutator + known.anticommutator,
          }
        : link,
    );
  }
  return [...merged.values()];
}
