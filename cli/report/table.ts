import { styleText } from 'node:util';
import Table from 'cli-table3';

/** What a text may look like. */
export interface Style {
  /** Bold where the terminal shows it. */
  readonly color: boolean;
  /** Characters in a line. */
  readonly columns: number;
}

export interface TableText {
  readonly head: readonly string[];
  readonly rows: readonly (readonly string[])[];
  /** Columns that are flush left; all others are flush right. */
  readonly left?: readonly number[];
}

const EDGES = [
  'top',
  'top-mid',
  'top-left',
  'top-right',
  'bottom',
  'bottom-mid',
  'bottom-left',
  'bottom-right',
];
const INSIDE = ['left', 'left-mid', 'mid', 'mid-mid', 'right', 'right-mid'];
/** No lines: columns stand apart by two spaces. */
const CHARS = Object.fromEntries([...EDGES, ...INSIDE].map((name) => [name, '']));

/** Bold where the terminal shows it. */
export function bold(text: string, color: boolean): string {
  return color ? styleText('bold', text, { validateStream: false } as never) : text;
}

/** A plain table: head, then rows. */
export function tableText({ head, rows, left = [0] }: TableText, color: boolean): string {
  const table = new Table({
    head: head.map((cell) => bold(cell, color)),
    chars: { ...CHARS, middle: '  ' },
    style: { head: [], border: [], 'padding-left': 0, 'padding-right': 0 },
    colAligns: head.map((_, i) => (left.includes(i) ? 'left' : 'right')),
  });
  for (const row of rows) table.push([...row]);
  const lines = table.toString().split('\n');
  return lines.map((line) => line.trimEnd()).join('\n');
}
