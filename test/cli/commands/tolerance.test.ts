import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { FIXED, FREE, freshFolder, invoke, studyFile } from './invoke.js';

// Our own contract of the command; the numbers against closed forms of a short resonant pulse.

const GOAL = 'goal: { at_least: 0.95, limits: { pulse.energy_pi_units: { at_most: 1.2 } } }\n';
const run = async (text: string, ...more: string[]) => {
  const { code, out, err } = await invoke(['tolerance', studyFile(text), '--json', ...more]);
  return { code, err, document: code === 2 ? null : JSON.parse(out) };
};

describe('tolerance', () => {
  it('judges each drift alone and all together, with a yield that repeats', async () => {
    const text = `${FIXED}${GOAL}drift: { area: 5 %, detuning: 20 ueV }\n`;
    const { code, document } = await run(text, '--samples', '60');
    expect(code).toBe(0);
    expect(document.cases.map((c: { drift: string }) => c.drift)).toEqual([
      'none',
      'area',
      'detuning',
      'together',
    ]);
    const [none, area, detuning, together] = document.cases.map((c: { brightness: number }) => c.brightness);
    expect(none).toBeGreaterThan(area);
    expect(Math.min(area, detuning)).toBeGreaterThan(together);
    // sin²(Θ/2) averaged over a Gaussian area: ½(1 + e^{−(σπ)²/2}), Allen & Eberly.
    expect(area / none).toBeCloseTo(0.5 * (1 + Math.exp(-((0.05 * Math.PI) ** 2) / 2)), 3);
    expect(document.yield.share).toBeGreaterThan(0.5);
    expect((await run(text, '--samples', '60')).document.yield).toEqual(document.yield);
  });

  it('finds the largest rms of an area drift where the averaged Rabi law puts it', async () => {
    const { document } = await run(`${FIXED}${GOAL}`);
    const { brightness } = document.cases[0];
    const largest = document.largest.find((l: { drift: string }) => l.drift === 'area');
    // ½(1 + e^{−(σπ)²/2})·brightness = 0.95
    const law = Math.sqrt(-2 * Math.log((2 * 0.95) / brightness - 1)) / Math.PI;
    expect(largest.unit).toBe('%');
    expect(Math.abs(largest.rms / 100 / law - 1)).toBeLessThan(2e-2);
    expect(document.yield).toBeNull();
  });

  it('ends with 1 when the goal is missed, and says what', async () => {
    const { code, document } = await run(`${FIXED}${GOAL}drift: { area: 30 % }\n`, '--samples', '20');
    expect(code).toBe(1);
    expect(document.met).toBe(false);
    expect(document.cases.at(-1).missed).toContain('signal.single');
    const limited = await run(FIXED.replace('1 pi', '1.2 pi') + GOAL, '--brightness', '0.5');
    expect(limited.code).toBe(1);
    expect(limited.document.cases[0].missed).toEqual(['pulse.energy_pi_units']);
    expect(limited.document.largest[0].rms).toBeNull();
  });

  it('draws one picture and prints one table', async () => {
    const base = join(freshFolder(), 'picture');
    const study = studyFile(`${FIXED}${GOAL}drift: { area: 5 % }\n`);
    const { code, out } = await invoke(['tolerance', study, '--samples', '10', '--out', base]);
    expect(code).toBe(0);
    expect(out).toMatch(/without drift +0\.\d+/);
    expect(out).toMatch(/yield: .* of 10 drift samples/);
    expect(existsSync(`${base}.svg`)).toBe(true);
    expect(readFileSync(`${base}.svg`, 'utf8')).toContain('area 5.00 %');
  });

  it.each([
    [FIXED, [], 'nothing is demanded'],
    [FREE, [], 'free parameters'],
    [FIXED + GOAL, ['--impurity', 'small'], '--impurity: got small'],
    [FIXED + GOAL, ['--samples', '1.5'], '--samples: got 1.5'],
  ])('refuses what it cannot answer', async (text, more, message) => {
    const { code, err } = await run(text, ...more);
    expect(code).toBe(2);
    expect(err).toContain(message);
  });

  it('needs a run with a best design where a directory is given', async () => {
    const { code, err } = await invoke(['tolerance', freshFolder()]);
    expect(code).toBe(2);
    expect(err).toContain('designs/best.yaml');
  });
});

describe('optimize under limits', () => {
  it('names an infeasible study with the limit that is missed', async () => {
    const text = FREE.replace(
      'at_least: 0.7,',
      'at_least: 0.7, limits: { pulse.duration_ps: { at_most: 2 ps } },',
    );
    const { code, err } = await invoke([
      'optimize',
      studyFile(text),
      '--out',
      join(freshFolder(), 'run'),
      '--workers',
      '1',
    ]);
    expect(code).toBe(1);
    expect(err).toContain('infeasible');
    expect(err).toMatch(
      /goal\.limits\.pulse\.duration_ps\.at_most: pulse\.duration_ps is 3\.\d* ps, allowed is at most 2 ps/,
    );
  });
});
