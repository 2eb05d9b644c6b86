import { type Legs, legsFor } from './legs.js';
import { BYTES } from './propagate.bytes.js';
import { propagate, ROW, setDamping, type Work, workFor } from './propagate.js';
import type { StepNumbers } from './step.js';
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

const machines = new Map<number, Machine>();

/** The compiled loops where the host has WebAssembly with vectors of two numbers, else the plain ones. */
export function machineFor(order: number): Machine {
  let machine = machines.get(order);
  if (!machine) {
    machine = compiledMachine(order) ?? plainMachine(order);
    machines.set(order, machine);
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

interface Compiled {
  readonly memory: { readonly buffer: ArrayBuffer };
  readonly propagate: (...numbers: number[]) => void;
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

export function compiledMachine(order: number): Machine | null {
  const compiled = instantiate();
  if (!compiled) return null;
  const legs = legsFor(order);
  const blocks = legs.complex.count + legs.hermitian.count;
  const sizes = [
    legs.size,
    legs.size,
    legs.size,
    legs.size,
    4 * (order + 1),
    ROW * BLOCK,
    (RECORD / WIDE) * blocks,
  ];
  const room = sizes.reduce((sum, n) => sum + WIDE * n, WIDE);
  (compiled.memory as unknown as { grow(pages: number): number }).grow(Math.ceil(room / PAGE));
  let end = WIDE;
  const [y, seen, fed, change, damping, table, records] = sizes.map((n) => {
    end += WIDE * n;
    return new Float64Array(compiled.memory.buffer, end - WIDE * n, n);
  });
  writeRecords(legs, records);
  const work: Work = { y, seen, fed, change, damping };
  const places = [records, y, seen, fed, change, damping].map((a) => a.byteOffset);
  let current: StepNumbers | null = null;
  return {
    legs,
    y,
    table,
    begin(numbers) {
      current = numbers;
      begin(legs, work, numbers);
    },
    advance(steps) {
      if (!current) return;
      const {
        intoTrace,
        intoCoherence,
        pair,
        pairDriven,
        twice,
        decaying,
        dephasing,
        opened,
        closed,
        both,
        turn,
      } = current;
      const { complex, hermitian } = legs;
      const [r, a, b, c, d, e] = places;
      compiled.propagate(
        steps,
        table.byteOffset,
        complex.count,
        hermitian.count,
        r,
        a,
        b,
        c,
        d,
        e,
        intoTrace,
        intoCoherence,
        pair,
        pairDriven,
        twice,
        decaying,
        dephasing,
        opened,
        closed,
        both,
        turn,
      );
    },
  };
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
