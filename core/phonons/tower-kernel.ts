import { BYTES } from './tower-kernel.bytes.js';

/** Lanes that are summed together in registers. */
export const GROUP = 8;
/** Bytes of a number. */
const WIDE = 8;

/** What the loops below work on; every index is a byte offset (of numbers of 8 bytes), as the compiled twin wants them. */
export interface TowerMatrices {
  readonly storeys: number;
  /** Coordinates of an operator. */
  readonly size: number;
  /** Lanes in whole groups, in bytes. */
  readonly stride: number;
  /** Decay of each storey. */
  readonly damping: Float64Array;
  /** Links by target row: first[t] … first[t+1]−1 of `sources` and `factors`. */
  readonly first: Int32Array;
  readonly sources: Int32Array;
  readonly factors: Float64Array;
  /** Generator by row, the same in every storey. */
  readonly rowStart: Int32Array;
  readonly columns: Int32Array;
  readonly values: Float64Array;
  /** Counting inside a storey, by target: countFirst[i] … countFirst[i+1]−1 feed countTargets[i]. */
  readonly countTargets: Int32Array;
  readonly countFirst: Int32Array;
  readonly countSources: Int32Array;
  readonly countFactors: Float64Array;
}

/** Room for arrays, and the loops on them. Arrays of a kernel hold until the next kernel is made. */
export interface TowerKernel {
  floats(values: Float64Array | number): Float64Array;
  ints(values: Int32Array): Int32Array;
  /** Gives back the room of all arrays that were made after the first call. */
  rewind(): void;
  /** term = factor·M y; sum += term; all four from this kernel. */
  addTerm(m: TowerMatrices, y: Float64Array, term: Float64Array, factor: number, sum: Float64Array): void;
}

/** The same in plain JavaScript: for hosts without WebAssembly, and to check the other one. */
export function plainKernel(): TowerKernel {
  return {
    floats: (values) => new Float64Array(values as number),
    ints: (values) => values,
    rewind: () => undefined,
    addTerm(m, y, term, factor, sum) {
      count(m, y, term);
      addTerm(m, y, term, factor, sum);
    },
  };
}

/** The compiled loops where the host has WebAssembly with vectors of two numbers, with `bytes` of room; else plain ones. */
export function towerKernel(bytes: number): TowerKernel {
  compiled ??= instantiate();
  if (compiled === 'none') return plainKernel();
  const { memory, count, addTerm } = compiled;
  const missing = Math.ceil((bytes - memory.buffer.byteLength) / PAGE);
  if (missing > 0) memory.grow(missing);
  const { buffer } = memory;
  let end = START;
  let kept = 0;
  const place = (length: number): number => {
    const at = end;
    end += ROUND * Math.ceil(length / ROUND);
    return at;
  };
  return {
    floats(values) {
      const length = typeof values === 'number' ? values : values.length;
      const out = new Float64Array(buffer, place(length * WIDE), length);
      if (typeof values === 'number') out.fill(0);
      else out.set(values);
      return out;
    },
    ints(values) {
      const out = new Int32Array(buffer, place(values.byteLength), values.length);
      out.set(values);
      return out;
    },
    rewind() {
      kept ||= end;
      end = kept;
    },
    addTerm(m, y, term, factor, sum) {
      const at = (x: Float64Array | Int32Array): number => x.byteOffset;
      count(
        m.storeys,
        m.size * m.stride,
        m.countTargets.length,
        at(m.countTargets),
        at(m.countFirst),
        at(m.countSources),
        at(m.countFactors),
        at(y),
        at(term),
      );
      addTerm(
        m.storeys,
        m.size,
        m.stride,
        at(m.damping),
        at(m.first),
        at(m.sources),
        at(m.factors),
        at(m.rowStart),
        at(m.columns),
        at(m.values),
        at(y),
        at(term),
        factor,
        at(sum),
      );
    },
  };
}

/** Bytes of `count` arrays with so many numbers and whole numbers in all. */
export const roomFor = (numbers: number, wholes: number, count: number): number =>
  START + WIDE * numbers + 4 * wholes + ROUND * count;

const PAGE = 65536;
const START = 64;
const ROUND = 16;

interface Compiled {
  readonly memory: { readonly buffer: ArrayBuffer; grow(pages: number): number };
  readonly count: (...offsets: number[]) => void;
  readonly addTerm: (...offsets: number[]) => void;
}

let compiled: Compiled | 'none' | undefined;

/** What of the host's WebAssembly is used. */
interface Host {
  readonly WebAssembly?: {
    validate(bytes: Uint8Array): boolean;
    readonly Module: new (bytes: Uint8Array) => object;
    readonly Instance: new (module: object) => { readonly exports: unknown };
  };
  atob(base64: string): string;
}

function instantiate(): Compiled | 'none' {
  const host = globalThis as unknown as Host;
  const bytes = Uint8Array.from(host.atob(BYTES), (c) => c.charCodeAt(0));
  if (!host.WebAssembly?.validate(bytes)) return 'none';
  const { Module, Instance } = host.WebAssembly;
  return new Instance(new Module(bytes)).exports as Compiled;
}

function count(m: TowerMatrices, y: Float64Array, term: Float64Array): void {
  const { countTargets, countFirst, countSources, countFactors } = m;
  const storey = (m.size * m.stride) / WIDE;
  term.fill(0);
  for (let shift = 0; shift < m.storeys * storey; shift += storey) {
    for (let i = 0; i < countTargets.length; i++) {
      let sum = 0;
      for (let k = countFirst[i]; k < countFirst[i + 1]; k++) {
        sum += countFactors[k] * y[shift + countSources[k] / WIDE];
      }
      term[shift + countTargets[i] / WIDE] = sum;
    }
  }
}

function addTerm(
  m: TowerMatrices,
  y: Float64Array,
  term: Float64Array,
  factor: number,
  sum: Float64Array,
): void {
  const { size, damping, first, sources, factors, rowStart, columns, values } = m;
  const stride = m.stride / WIDE;
  for (let t = 0; t < m.storeys * size; t++) {
    const storey = Math.floor(t / size);
    const own = storey * size * stride;
    const row = t - storey * size;
    for (let lane = 0; lane < stride; lane++) {
      const at = t * stride + lane;
      let a = term[at] + -damping[storey] * y[at];
      for (let k = first[t]; k < first[t + 1]; k++) a += factors[k] * y[sources[k] / WIDE + lane];
      for (let k = rowStart[row]; k < rowStart[row + 1]; k++) {
        a += values[k] * y[own + columns[k] / WIDE + lane];
      }
      a *= factor;
      term[at] = a;
      sum[at] += a;
    }
  }
}
