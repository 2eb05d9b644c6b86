import type { Fault, Place, Remark } from '../contract.js';
import type { Leaf } from '../keys/kinds.js';
import type { Placed } from '../source/placed.js';

/** What stands at a key that can be free. */
export type FieldState =
  | { readonly kind: 'fixed'; readonly value: number }
  | { readonly kind: 'range'; readonly from: number; readonly to: number; readonly scale: 'linear' | 'log' }
  | { readonly kind: 'list'; readonly values: readonly number[] }
  | { readonly kind: 'tie'; readonly target: string; readonly at: Place }
  | { readonly kind: 'faulty' };

export interface Field {
  readonly path: string;
  readonly leaf: Leaf<number>;
  readonly at: Place;
  readonly state: FieldState;
  /** Puts a value into what was read: a tie gets its value only when everything is read. */
  assign(value: number): void;
}

/** Faults and remarks are collected, never thrown. */
export class ReadContext {
  readonly faults: Fault[] = [];
  readonly remarks: Remark[] = [];
  readonly fields = new Map<string, Field>();

  constructor(readonly root: Placed) {}

  fault(at: Place, path: string, found: string, wanted: string): undefined {
    this.faults.push({ file: at.file, line: at.line, column: at.column, path, found, wanted });
    return undefined;
  }

  remark(at: Place, path: string, text: string): void {
    this.remarks.push({ file: at.file, line: at.line, column: at.column, path, text });
  }
}
