import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { csvCells, freshFolder, invoke, studyFile } from './invoke.js';

interface Point {
  readonly level: number;
  readonly design: string;
  readonly figures: {
    readonly signal: { readonly single: number };
    readonly collected: { readonly multiphoton: number };
    readonly phonons: { readonly method: string };
  };
}

const STUDY = `pulsewright: 1
emitter:
  model: two-level
  lifetime: 300 ps
  phonons: { coupling: 0.03 ps^2, cutoff: 2.2 1/ps, temperature: 4 K, method: auto }
pulse: { tones: [{ fwhm: 1 ps, area: { from: 0.5 pi, to: 1 pi } }] }
goal: { at_least: 0.75, front: { from: 0.6, to: 0.8, points: 2 } }
search: { evaluations: 140, seed: 1 }
`;

describe('optimize with phonons', () => {
  it('writes a front of the exact method, and design files that give its figures again', async () => {
    const run = join(freshFolder(), 'run');
    expect((await invoke(['optimize', studyFile(STUDY), '--out', run, '--workers', '1'])).code).toBe(0);
    const document = JSON.parse(readFileSync(join(run, 'front.json'), 'utf8')) as {
      readonly points: readonly Point[];
      readonly best: Point;
      readonly evaluations: number;
      readonly phonon_correction: unknown;
    };
    expect(document.evaluations).toBeLessThanOrEqual(140);
    expect(document.phonon_correction).toEqual({ method: 'exact', tolerance: 1e-3, levels: 3, settled: 3 });
    expect(document.points.length).toBe(2);
    for (const { level, design, figures } of [...document.points, document.best]) {
      expect(figures.phonons.method).toBe('exact');
      expect(figures.signal.single).toBeGreaterThanOrEqual(level);
      expect(figures.signal.single).toBeLessThan(level + 1e-3);
      const { out } = await invoke(['evaluate', join(run, design), '--json']);
      const again = JSON.parse(out) as Point['figures'];
      expect(again.phonons.method).toBe('exact');
      expect(again.collected.multiphoton).toBe(figures.collected.multiphoton);
    }
    const cells = csvCells(readFileSync(join(run, 'archive.csv'), 'utf8'));
    expect(cells.length).toBeGreaterThan(2);
  });
});
