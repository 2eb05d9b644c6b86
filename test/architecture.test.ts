import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, relative, resolve, sep } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';

const root = resolve(dirname(fileURLToPath(import.meta.url)), '..');

function sources(folder: string): string[] {
  return readdirSync(join(root, folder), { recursive: true, encoding: 'utf8' })
    .filter((f) => f.endsWith('.ts'))
    .map((f) => join(root, folder, f));
}

/** Every module a file names: static and dynamic imports, re-exports, and the paths of worker entries. */
function references(file: string): string[] {
  const text = readFileSync(file, 'utf8');
  const found: string[] = [];
  const patterns = [
    /\b(?:from|import)\s+['"]([^'"]+)['"]/g,
    /\bimport\s*\(\s*['"]([^'"]+)['"]/g,
    /\brequire\s*\(\s*['"]([^'"]+)['"]/g,
    /\bnew\s+URL\s*\(\s*['"]([^'"]+)['"]/g,
    /\bnew\s+Worker\s*\(\s*['"]([^'"]+)['"]/g,
  ];
  for (const p of patterns) for (const m of text.matchAll(p)) found.push(m[1]);
  return found;
}

function folderOf(file: string, reference: string): string | null {
  if (!reference.startsWith('.')) return null;
  return relative(root, resolve(dirname(file), reference)).split(sep)[0];
}

/** Reason beside each rule, so that a failure explains itself. */
const layers: Record<string, { allowed: string[]; reason: string }> = {
  core: { allowed: ['core'], reason: 'core is the physics alone: it also runs in a browser' },
  optimizers: {
    allowed: ['core', 'optimizers'],
    reason: 'a search knows the physics only through a problem, and no user interface at all',
  },
  cli: { allowed: ['core', 'optimizers', 'cli'], reason: 'the command line is the top layer' },
};

/** What core may take from npm: pure computation only. */
const PURE_PACKAGES = ['ml-matrix', 'fft.js', 'pure-rand'];
const isPure = (name: string): boolean => PURE_PACKAGES.some((p) => name === p || name.startsWith(`${p}/`));

describe('dependency rule cli → optimizers → core', () => {
  for (const [folder, { allowed, reason }] of Object.entries(layers)) {
    it(`${folder} refers only to ${allowed.join(', ')} (${reason})`, () => {
      const breaches = sources(folder).flatMap((file) =>
        references(file)
          .map((r) => ({ r, target: folderOf(file, r) }))
          .filter(({ target }) => target !== null && !allowed.includes(target))
          .map(({ r }) => `${relative(root, file)} → ${r}`),
      );
      expect(breaches).toEqual([]);
      expect(sources(folder).length).toBeGreaterThan(3);
    });
  }

  it('core uses no Node module and no package that is not pure computation', () => {
    const breaches = sources('core').flatMap((file) =>
      references(file)
        .filter((r) => !r.startsWith('.') && !isPure(r))
        .map((r) => `${relative(root, file)} → ${r}`),
    );
    expect(breaches).toEqual([]);
  });

  it('core has no clock, no global randomness, no code from text, no process', () => {
    const forbidden = /\bMath\.random\b|\bDate\b|\bperformance\.|\beval\s*\(|\bnew Function\b|\bprocess\./;
    const breaches = sources('core').flatMap((file) =>
      readFileSync(file, 'utf8')
        .split('\n')
        .map((line, i) => ({ line: line.replace(/\/\/.*|^\s*\*.*|\/\*.*?\*\//g, ''), i }))
        .filter(({ line }) => forbidden.test(line))
        .map(({ i }) => `${relative(root, file)}:${i + 1}`),
    );
    expect(breaches).toEqual([]);
  });
});
