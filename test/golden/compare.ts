import { readFileSync } from 'node:fs';

/** A golden file's plain data. */
export type Json = null | number | string | boolean | readonly Json[] | { readonly [key: string]: Json };

export function readGolden<T>(name: string): T {
  return JSON.parse(readFileSync(new URL(name, import.meta.url), 'utf8')) as T;
}

/** The value at a dotted path such as `emitted.p.0`. */
export function at(tree: unknown, path: string): unknown {
  let here = tree;
  for (const key of path.split('.')) here = (here as Record<string, unknown> | null)?.[key];
  return here;
}

/** Probabilities that are promised to 1e-9 absolute. */
const ABSOLUTE = /(^|\.)(p\.[01]|single|any)$/;

/**
 * Allowed difference from a golden value: 1e-9 for p_0, p_1 and what is made of them, 1e-6 relative for the rest
 * down to 1e-7, and 1e-13 below that.
 */
export function allowance(path: string, value: number): number {
  if (ABSOLUTE.test(path)) return 1e-9;
  const relative = 1e-6 * Math.abs(value);
  return Math.abs(value) >= 1e-7 ? relative : Math.max(relative, 1e-13);
}

/** Every path at which two figures disagree, with both values: empty when the promise is kept. */
export function disagreements(found: unknown, golden: unknown, paths: readonly string[]): string[] {
  const out: string[] = [];
  for (const path of paths) {
    const wanted = at(golden, path);
    const got = at(found, path);
    if (typeof wanted !== 'number') throw new Error(`golden value missing: ${path}`);
    if (typeof got !== 'number') {
      out.push(`${path}: got ${String(got)}, golden ${wanted}`);
      continue;
    }
    const excess = Math.abs(got - wanted) / allowance(path, wanted);
    if (!(excess <= 1))
      out.push(`${path}: got ${got}, golden ${wanted} (${excess.toPrecision(3)} times too far)`);
  }
  return out;
}

const COUNT = ['mean', 'factorial2', 'g2'];
const PATHS = {
  emitted: [...COUNT, 'p.0', 'p.1', 'p.2', 'p.3', 'multiphoton'].map((p) => `emitted.${p}`),
  filteredMoments: COUNT.map((p) => `filtered.${p}`),
  filteredCounts: ['p.0', 'p.1', 'multiphoton'].map((p) => `filtered.${p}`),
  signalMoments: ['signal.mean', 'signal.g2', 'collected.mean', 'collected.g2'],
  counts: ['signal', 'collected'].flatMap((b) => ['single', 'any', 'multiphoton'].map((p) => `${b}.${p}`)),
  pulse: ['pulse.energy_pi_units', 'pulse.duration_ps', 'pulse.bandwidth_ghz'],
};

/** True where six factorial moments bound P(n≥2) to the promised accuracy. */
function seriesHolds(part: { bound: number; multiphoton: number }): boolean {
  return part.bound <= 1e-6 * Math.max(part.multiphoton, 1e-7);
}

/** What a golden figure tree can be held to; probabilities from too short a moment series are left out. */
export function comparablePaths(golden: { [key: string]: unknown }): string[] {
  const paths = [...PATHS.emitted, ...PATHS.signalMoments, 'collected.leakage'];
  if (golden['pulse']) paths.push(...PATHS.pulse);
  const filtered = golden['filtered'] as { bound: number; multiphoton: number } | null;
  if (!filtered) return [...paths, ...PATHS.counts];
  paths.push(...PATHS.filteredMoments);
  if (seriesHolds(filtered)) paths.push(...PATHS.filteredCounts);
  if (seriesHolds(golden['signal'] as { bound: number; multiphoton: number })) paths.push(...PATHS.counts);
  return paths;
}

/** Fields that must be null, because the reference's own six moments do not bound them. */
export function unknowablePaths(golden: { [key: string]: unknown }): string[] {
  const filtered = golden['filtered'] as { bound: number; multiphoton: number } | null;
  if (!filtered || seriesHolds(filtered)) return [];
  return ['filtered.p', 'filtered.multiphoton'];
}
