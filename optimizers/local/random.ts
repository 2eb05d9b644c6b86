import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plusFromState } from 'pure-rand/generator/xoroshiro128plus';

/** A seeded stream of random numbers. */
export interface Random {
  /** Uniform in [0, 1). */
  readonly uniform: () => number;
  /** Uniform among 0 … count − 1. */
  readonly index: (count: number) => number;
}

/** One step of the SplitMix-type mixer of Steele, Lea & Flood, OOPSLA 2014 (32-bit finaliser of MurmurHash3). */
function mix(x: number): number {
  let z = x | 0;
  z = Math.imul(z ^ (z >>> 16), 0x85ebca6b);
  z = Math.imul(z ^ (z >>> 13), 0xc2b2ae35);
  return (z ^ (z >>> 16)) | 0;
}

/** Stream number `index` of a root seed (both integers below 2^53): the same pair gives the same numbers. */
export function randomStream(seed: number, index: number): Random {
  let state = 0x9e3779b9 | 0;
  const words = [seed, seed / 0x100000000, index, index / 0x100000000].map((word) => {
    state = mix((state + 0x9e3779b9 + Math.floor(word)) | 0);
    return state;
  });
  const generator = xoroshiro128plusFromState(words.map((word, i) => mix(word ^ state ^ i) | 1));
  const uniform = () => uniformFloat64(generator);
  return { uniform, index: (count) => Math.floor(uniform() * count) };
}
