import { readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import type { Figures } from '../../../core/index.js';
import { csvCells, freshFolder, invoke, studyFile } from './invoke.js';

const STUDY = `pulsewright: 1
title: Three axes
emitter: { model: two-level, lifetime: 300 ps, wavelength: 930 nm }
pulse:
  tones:
    - fwhm: { from: 3 ps, to: 30 ps, scale: log }
      area: { from: 0.3 pi, to: 1.4 pi }
laser: { pi_pulse: { energy: 12 fJ, fwhm: 5 ps } }
goal:
  at_least: 0.7
  front: { from: 0.4, to: 0.85, points: 4 }
  third: { axis: energy, slices: 3 }
search: { evaluations: 260, seed: 5 }
`;

const read = (folder: string, name: string) => readFileSync(join(folder, name), 'utf8');

interface FrontJson {
  readonly goal: { readonly third: { readonly figure: string; readonly slices: readonly (number | null)[] } };
  readonly points: readonly {
    readonly slice: number | null;
    readonly design: string;
    readonly found_by: string;
  }[];
  readonly stages: readonly { readonly name: string }[];
  readonly explanation: {
    readonly parts: readonly {
      readonly branch: string;
      readonly designs: number;
      readonly slice: number | null;
    }[];
    readonly found_again: { readonly all: { readonly elsewhere: number; readonly again: number } | null };
    readonly twice_the_budget: { readonly estimated_gain: { readonly least: number; readonly most: number } };
    readonly probably_not_converged: readonly string[];
  };
}

const finished = (() => {
  let run: Promise<{ folder: string; code: number; out: string; err: string }> | null = null;
  return () => {
    run ??= (async () => {
      const folder = freshFolder();
      return {
        folder,
        ...(await invoke(['optimize', studyFile(STUDY), '--out', folder, '--workers', '1'])),
      };
    })();
    return run;
  };
})();

describe('optimize with a third axis', () => {
  it('writes every slice with its bound in fJ, and designs that keep it', async () => {
    const { folder, code } = await finished();
    expect(code).toBe(0);
    const [head, ...rows] = csvCells(read(folder, 'front.csv'));
    expect(head.slice(0, 3)).toEqual(['level', 'slice [fJ]', 'design']);
    const bounds = [...new Set(rows.map((row) => row[1]))];
    expect(bounds.length).toBeGreaterThanOrEqual(2);
    expect(bounds.at(-1)).toBe('');
    const energy = head.indexOf('pulse.energy_fj');
    for (const row of rows) {
      if (row[1] !== '') expect(Number(row[energy])).toBeLessThanOrEqual(Number(row[1]));
    }
    const [tightest] = rows.filter((row) => row[1] !== '');
    const { out } = await invoke(['evaluate', join(folder, tightest[2]), '--json']);
    expect((JSON.parse(out) as Figures).pulse.energy_fj).toBe(Number(tightest[energy]));
    const files = new Set(rows.map((row) => row[2].replace('designs/', '')));
    expect(readdirSync(join(folder, 'designs')).sort()).toEqual([...files, 'best.yaml'].sort());
    expect(csvCells(read(folder, 'archive.csv'))[0]).toContain('pulse.energy_fj');
  });

  it('prints a column for each bound, the best design within each, and how all was found', async () => {
    const { folder, out } = await finished();
    expect(out).toMatch(/signal ≥ *\n/);
    expect(out).toMatch(/≤ [\d.]+ fJ +≤ [\d.]+ fJ +no bound/);
    expect(out).toContain('best design at signal P(n=1) ≥ 0.7, by the bound of pulse energy:');
    expect(out).toContain('volume between the front and the corner at\n');
    expect(out).toContain('how the front was found');
    expect(out).toMatch(/resonant, near π/);
    expect(out).toContain('twice the budget: ');
    for (const line of out.split('\n')) {
      if (!line.startsWith('files:')) expect(line.length).toBeLessThanOrEqual(120);
    }
    const svg = read(folder, 'front.svg');
    expect(svg).toContain('slices of the front, by pulse energy');
    expect(svg).toContain('no bound');
    expect(svg).toContain('asked for: 0.7');
  });

  it('tells slices, stages and doubts in front.json', async () => {
    const { folder } = await finished();
    const document = JSON.parse(read(folder, 'front.json')) as FrontJson;
    expect(document.goal.third.figure).toBe('pulse.energy_fj');
    expect(document.goal.third.slices.at(-1)).toBeNull();
    const stages = new Set(document.stages.map(({ name }) => name));
    for (const point of document.points) expect(stages).toContain(point.found_by);
    const { parts, twice_the_budget, probably_not_converged } = document.explanation;
    expect(parts.reduce((sum, part) => sum + part.designs, 0)).toBe(document.points.length);
    const { least, most } = twice_the_budget.estimated_gain;
    expect(least).toBeLessThanOrEqual(most);
    // 260 evaluations for three slices are few: the rule must say so.
    expect(probably_not_converged.join()).toContain('still growing');
  });

  it('is verified, compared and resumed like any other run', async () => {
    const { folder } = await finished();
    const before = read(folder, 'front.csv');
    const study = join(folder, 'study.yaml');
    const again = await invoke(['optimize', study, '--out', folder, '--resume', '--workers', '1']);
    expect(again.code).toBe(0);
    expect(read(folder, 'front.csv')).toBe(before);
    const verified = await invoke(['verify', folder, '--workers', '1']);
    expect(verified.code).toBe(0);
    const names = csvCells(read(folder, 'verify.csv')).map((row) => row[0]);
    expect(new Set(names).size).toBe(names.length);
    const other = freshFolder();
    const plain = studyFile(STUDY.replace(/ {2}third.*\n/, '').replace('260', '120'));
    await invoke(['optimize', plain, '--out', other, '--workers', '1']);
    const compared = await invoke(['compare', folder, other, '--json']);
    expect(compared.code).toBe(0);
    const { fronts } = JSON.parse(compared.out) as { fronts: { points: { brightness: number }[] }[] };
    const bright = fronts[0].points.map(({ brightness }) => brightness);
    const open = JSON.parse(read(folder, 'front.json')) as FrontJson;
    expect(bright).toHaveLength(open.points.filter(({ slice }) => slice === null).length);
  });
});

describe('explanation of a run with two axes', () => {
  it('is told for search methods without local solves, too', async () => {
    const folder = freshFolder();
    const text = STUDY.replace(/ {2}third.*\n/, '').replace('seed: 5', 'seed: 5, method: nsga2');
    const { out } = await invoke(['optimize', studyFile(text), '--out', folder, '--workers', '1']);
    expect(out).toContain('found again: not told: the method makes no local solves');
    expect((JSON.parse(read(folder, 'front.json')) as FrontJson).explanation.found_again.all).toBeNull();
  });
});

describe('a limit in fJ', () => {
  it('names an infeasible study with the limit that is missed most, in its own unit', async () => {
    const limits =
      'limits: { pulse.energy_fj: { at_most: 5 aJ }, pulse.peak_rabi_per_ps: { at_most: 0.9 rad/ps } }';
    const text = STUDY.replace(/ {2}third.*\n/, `  ${limits}\n`).replace('260', '60');
    const folder = freshFolder();
    const { code, out, err } = await invoke(['optimize', studyFile(text), '--out', folder, '--workers', '1']);
    expect(code).toBe(1);
    expect(err).toMatch(/infeasible: none of \d+ evaluations meets every limit/);
    expect(err).toMatch(
      /goal\.limits\.pulse\.energy_fj\.at_most: .* is \d+ aJ, allowed is at most 5 aJ \(missed by a factor of [\d.]+\)/,
    );
    expect(err).not.toContain('goal.limits.pulse.peak_rabi');
    expect(out).not.toContain('how the front was found');
    expect(out).not.toContain('hypervolume');
  });

  it('says of several which is missed most and which least', async () => {
    // The narrowest allowed pulse of 0.3 π takes 1.08/3 of a π pulse at 5 ps: far above either bound.
    const limits =
      'limits: { pulse.energy_fj: { at_most: 1 aJ }, pulse.peak_rabi_per_ps: { at_most: 0.02 1/ps } }';
    const text = STUDY.replace(/ {2}third.*\n/, `  ${limits}\n`).replace('260', '60');
    const { code, err } = await invoke([
      'optimize',
      studyFile(text),
      '--out',
      freshFolder(),
      '--workers',
      '1',
    ]);
    expect(code).toBe(1);
    const lines = err.split('\n').filter((line) => line.startsWith('  '));
    expect(lines[0]).toMatch(/energy_fj\.at_most: .* allowed is at most 1 aJ \(missed by a factor of/);
    expect(lines[1]).toMatch(
      /peak_rabi_per_ps\.at_most: .* is 0\.0\d+ 1\/ps, allowed is at most 0\.02 1\/ps/,
    );
    expect(lines[2]).toBe('  least violated: goal.limits.pulse.peak_rabi_per_ps.at_most');
  });

  it('needs a measured π pulse, and so do an axis of energy or leakage', async () => {
    const bare = STUDY.replace(/laser.*\n/, '');
    const folder = freshFolder();
    const run = async (text: string) => {
      writeFileSync(join(folder, 'study.yaml'), text);
      return invoke(['check', join(folder, 'study.yaml')]);
    };
    const energy = await run(bare);
    expect(energy.code).toBe(2);
    expect(energy.err).toMatch(/goal\.third\.axis: got energy; needs laser\.pi_pulse with energy and fwhm/);
    const leakage = await run(bare.replace('axis: energy', 'axis: leakage'));
    expect(leakage.err).toMatch(/goal\.third\.axis: got leakage; needs laser\.pi_pulse/);
    const silent = await run(STUDY.replace('axis: energy', 'axis: leakage'));
    expect(silent.err).toMatch(/goal\.third\.axis: got leakage; needs laser\.rejection above 0/);
    const limited = await run(
      bare.replace('third: { axis: energy, slices: 3 }', 'limits: { pulse.energy_fj: { at_most: 5 fJ } }'),
    );
    expect(limited.err).toMatch(/goal\.limits\.pulse\.energy_fj: got a limit; needs laser\.pi_pulse/);
    const mean = await run(bare.replace('axis: energy', 'axis: mean'));
    expect(mean.code).toBe(0);
  });
});
