import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { uniformInt } from 'pure-rand/distribution/uniformInt';
import { xoroshiro128plusFromState } from 'pure-rand/generator/xoroshiro128plus';

/** Seeded random numbers of one task. */
export interface Stream {
  /** Uniform in [0, 1), 53 bits. */
  next(): number;
  /** Standard normal. */
  normal(): number;
  /** Uniform integer in 0 … n − 1. */
  int(n: number): number;
}

/** Streams that share a hashed start and differ by jumps of 2^64 numbers. */
const BLOCK = 64;

/** Four 32-bit words from up to three, by the finaliser of MurmurHash3 (Appleby, public domain) over a Weyl sequence. */
function hashed(words: readonly number[]): number[] {
  let state = 0x9e3779b9;
  const mix = (word: number) => {
    state = (state + 0x9e3779b9) | 0;
    let h = state ^ word;
    h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
    h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
    h ^= h >>> 16;
    state = (state ^ h) | 0;
    return h;
  };
  for (const word of words) mix(word | 0);
  return [mix(0), mix(0), mix(0), mix(1)];
}

function checkIndex(name: string, value: number): void {
  if (!Number.isSafeInteger(value) || value < 0) {
    throw new RangeError(`${name}: got ${value}; needs a whole number from 0 to ${Number.MAX_SAFE_INTEGER}`);
  }
}

/**
 * The random stream number `index` of a seed, the same wherever and whenever it is made. xoroshiro128+ (Blackman &
 * Vigna, ACM Trans. Math. Softw. 47, 36 (2021)); neighbouring indices are 2^64 numbers apart.
 */
export function stream(seed: number, index: number): Stream {
  checkIndex('seed', seed);
  checkIndex('stream index', index);
  const block = Math.floor(index / BLOCK);
  const words = [seed, seed / 2 ** 32, block, block / 2 ** 32];
  const generator = xoroshiro128plusFromState(hashed(words));
  for (let i = 0; i < index % BLOCK; i++) generator.jump();
  let spare = Number.NaN;
  const next = () => uniformFloat64(generator);
  return {
    next,
    normal() {
      if (!Number.isNaN(spare)) {
        const value = spare;
        spare = Number.NaN;
        return value;
      }
      // Box–Muller; 1 − u is never zero.
      const radius = Math.sqrt(-2 * Math.log(1 - next()));
      const angle = 2 * Math.PI * next();
      spare = radius * Math.sin(angle);
      return radius * Math.cos(angle);
    },
    int(n) {
      if (!Number.isSafeInteger(n) || n < 1)
        throw new RangeError(`random integer below ${n}: needs at least 1`);
      return uniformInt(generator, 0, n - 1);
    },
  };
}
