import { type Legs, legsFor } from './legs.js';
import { BYTES } from './propagate.bytes.js';
import { propagate, ROW, setDamping, type Work, workFor } from './propagate.js';
import { FILTER_NUMBERS, type StepNumbers } from './step.js';
import { BLOCK } from './table.js';

/** Runs the blocks of one order over tables of steps. Its arrays are used again by the next call. */
export interface Machine {
  readonly legs: Legs;
  /** The blocks (legs.ts). */
  readonly y: Float64Array;
  /** ROW numbers a step. */
  readonly table: Float64Array;
  /** Puts everything into the ground state. */
  begin(numbers: StepNumbers): void;
  /** Takes the first steps of the table. */
  advance(steps: number): void;
}

/** The same loops in plain JavaScript: for hosts without WebAssembly, and to check the other ones. */
export function plainMachine(order: number): Machine {
  const legs = legsFor(order);
  const work = workFor(legs);
  const table = new Float64Array(ROW * BLOCK);
  let current: StepNumbers | null = null;
  return {
    legs,
    y: work.y,
    table,
    begin(numbers) {
      current = numbers;
      begin(legs, work, numbers);
    },
    advance(steps) {
      if (current) propagate(legs, work, current, table, 0, steps);
    },
  };
}

const compiledMachines = new Map<number, ReversibleMachine | null>();
const plainMachines = new Map<number, Machine>();

/** The compiled loops where the host has WebAssembly with vectors of two numbers, else the plain ones. */
export function machineFor(order: number): Machine {
  const compiled = reversibleMachine(order);
  if (compiled) return compiled;
  const plain = plainMachines.get(order) ?? plainMachine(order);
  plainMachines.set(order, plain);
  return plain;
}

/** The compiled loops, or null where the host cannot run them. */
export function reversibleMachine(order: number): ReversibleMachine | null {
  let machine = compiledMachines.get(order);
  if (machine === undefined) {
    machine = compiledMachine(order);
    compiledMachines.set(order, machine);
  }
  return machine;
}

function begin(legs: Legs, work: Work, numbers: StepNumbers): void {
  work.y.fill(0);
  const start = legs.at(0, 0, 0);
  work.y[start + 6] = 1;
  setDamping(work, numbers);
}

/** Bytes of a number, of a page of memory, and of a record of propagate.as. */
const WIDE = 8;
const PAGE = 65536;
const RECORD = 48;

/** Exports of propagate.as. */
interface Compiled {
  readonly memory: { readonly buffer: ArrayBuffer; grow(pages: number): number };
  readonly place: (...numbers: number[]) => void;
  readonly configure: (numbers: number) => void;
  readonly propagate: (steps: number, table: number) => void;
  readonly record: (steps: number, table: number, tape: number) => void;
  readonly sweep: (...numbers: number[]) => void;
}

/** What of the host's WebAssembly is used. */
interface Host {
  readonly WebAssembly?: {
    validate(bytes: Uint8Array): boolean;
    readonly Module: new (bytes: Uint8Array) => object;
    readonly Instance: new (module: object) => { readonly exports: unknown };
  };
  atob(base64: string): string;
}

let module: object | null | undefined;

/** One instance, and so one memory, per order: arrays never move. */
function instantiate(): Compiled | null {
  const host = globalThis as unknown as Host;
  if (module === undefined) {
    const bytes = Uint8Array.from(host.atob(BYTES), (c) => c.charCodeAt(0));
    module = host.WebAssembly?.validate(bytes) ? new host.WebAssembly.Module(bytes) : null;
  }
  return module && host.WebAssembly ? (new host.WebAssembly.Instance(module).exports as Compiled) : null;
}

/** Adds reverse sweeps to a machine; one scalar at a time. */
export interface ReversibleMachine extends Machine {
  /** Takes the first steps of the table and keeps what `reverse` needs of them. */
  record(steps: number): void;
  /** Derivatives by the blocks: after the recorded steps before `reverse`, ahead of them after it. */
  readonly lambda: Float64Array;
  /** Derivatives by the rows of the table: rotation row-major, then the drive at the end of the step. */
  readonly byRow: Float64Array;
  /** Gains the derivatives by the numbers of steps (numberSlopes in step.ts). */
  readonly byNumber: Float64Array;
  reverse(steps: number): void;
}

function compiledMachine(order: number): ReversibleMachine | null {
  const compiled = instantiate();
  if (!compiled) return null;
  const legs = legsFor(order);
  const blocks = legs.complex.count + legs.hermitian.count;
  const { size } = legs;
  const rows = ROW * BLOCK;
  // Blocks, what events see, its sums and changes stand one after the other, as propagate.as wants them.
  const sizes = [size, size, size, size, 4 * (order + 1), rows, (RECORD / WIDE) * blocks, NUMBERS];
  const adjoint = [4 * size * BLOCK, size, rows, FILTER_NUMBERS, 3 * size];
  const room = [...sizes, ...adjoint].reduce((sum, n) => sum + WIDE * n, WIDE);
  compiled.memory.grow(Math.ceil(room / PAGE));
  let end = WIDE;
  const place = (n: number): Float64Array => {
    end += WIDE * n;
    return new Float64Array(compiled.memory.buffer, end - WIDE * n, n);
  };
  const [y, seen, fed, change, damping, table, records, numbers] = sizes.map(place);
  const [tape, lambda, byRow, byNumber, work] = adjoint.map(place);
  writeRecords(legs, records);
  const { complex, hermitian } = legs;
  compiled.place(
    complex.count,
    hermitian.count,
    WIDE * size,
    records.byteOffset,
    y.byteOffset,
    damping.byteOffset,
  );
  const held: Work = { y, seen, fed, change, damping };
  return {
    legs,
    y,
    table,
    begin(step) {
      begin(legs, held, step);
      writeNumbers(step, numbers);
      compiled.configure(numbers.byteOffset);
    },
    advance: (steps) => compiled.propagate(steps, table.byteOffset),
    record: (steps) => compiled.record(steps, table.byteOffset, tape.byteOffset),
    lambda,
    byRow,
    byNumber,
    reverse(steps) {
      const [t, p, l, r, n, w] = [table, tape, lambda, byRow, byNumber, work].map((a) => a.byteOffset);
      compiled.sweep(steps, t, p, 1, l, r, 0, n, w);
    },
  };
}

const NUMBERS = 11;

/** In the order of `configure` (propagate.as). */
function writeNumbers(n: StepNumbers, out: Float64Array): void {
  const { intoTrace, intoCoherence, pair, pairDriven, twice, decaying, opened, closed, turn } = n;
  out.set([intoTrace, intoCoherence, pair, pairDriven, twice, decaying, opened, closed, turn]);
  out[9] = n.dephasing;
  out[10] = n.both;
}

/** Offsets in bytes as whole numbers of 32 bits, then weights. */
function writeRecords(legs: Legs, out: Float64Array): void {
  let at = 0;
  for (const f of [legs.complex, legs.hermitian]) {
    for (let i = 0; i < f.count; i++, at += RECORD / WIDE) {
      const whole = new Int32Array(out.buffer, out.byteOffset + WIDE * at, 8);
      const places = [f.before, f.leftOpen, f.leftClose, f.rightOpen, f.rightClose];
      whole.set([WIDE * f.offset[i], 3 * WIDE * f.legs[i], ...places.map((p) => WIDE * p[i])]);
      out[at + 4] = f.leftWeight[i];
      out[at + 5] = f.rightWeight[i];
    }
  }
}
