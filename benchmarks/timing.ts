import { cpus } from 'node:os';
import { performance } from 'node:perf_hooks';

/** Minimum and spread of repeated timings; background load only ever adds, so the minimum is the machine's. */
export interface Timing {
  /** Seconds. */
  readonly least: number;
  /** Median over minimum. */
  readonly spread: number;
}

export function summarise(seconds: readonly number[]): Timing {
  const sorted = [...seconds].sort((a, b) => a - b);
  return { least: sorted[0], spread: sorted[Math.floor(sorted.length / 2)] / sorted[0] };
}

/** Results are added up here, so that no evaluation can be optimised away. */
export const sink = { total: 0 };

/** Seconds per call of `work`, repeated until `least` seconds have passed. */
export function timeOnce(work: () => number, least: number): number {
  const began = performance.now();
  let calls = 0;
  let elapsed = 0;
  do {
    sink.total += work();
    calls++;
    elapsed = (performance.now() - began) / 1000;
  } while (elapsed < least);
  return elapsed / calls;
}

export function machineLine(): string {
  const processors = cpus();
  return `${processors.length} × ${processors[0].model.trim()}, Node ${process.version}, ${process.platform} ${process.arch}`;
}

/** Seconds as text with three digits and a fitting unit. */
export function seconds(value: number): string {
  if (value < 1e-3) return `${(value * 1e6).toPrecision(3)} µs`;
  return value < 1 ? `${(value * 1e3).toPrecision(3)} ms` : `${value.toPrecision(3)} s`;
}

export function markdownTable(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const line = (cells: readonly string[]): string => `| ${cells.join(' | ')} |`;
  return [line(head), line(head.map(() => '---')), ...rows.map(line)].join('\n');
}
