/**
 * g⁽²⁾[0] against pulse width for two-photon excitation, counted bare and behind a filter, and for a resonant two-level
 * emitter: two scans of the built command, one table, one picture.
 *
 *   npm run docs:scaling          writes docs/two-photon-scaling.csv and .svg
 */
import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { plotSeries } from '../cli/report/plots/series.js';
import { HBAR } from '../core/units/constants.js';

const root = fileURLToPath(new URL('..', import.meta.url));
const docs = join(root, 'docs');
const scratch = mkdtempSync(join(tmpdir(), 'pulsewright-scaling-'));

const POINTS = 13;
const [SHORTEST, LONGEST] = [2, 20];
const [LIFETIME, BINDING] = [400, 5];

/** Area of the two-photon π pulse, π: Θ²ħ/(2√π σ E_b) = π for a Gaussian. */
function twoPhotonPi(fwhm: number): number {
  const sigma = fwhm / (2 * Math.sqrt(Math.LN2));
  return Math.sqrt((2 * Math.PI ** 1.5 * sigma * BINDING) / HBAR) / Math.PI;
}

/** Scans a study with the built command and returns columns of its CSV by name. */
function scanned(study: string, overs: readonly string[]): (column: string) => number[] {
  const base = join(scratch, study);
  const over = overs.flatMap((text) => ['--over', text]);
  const path = join(root, 'benchmarks', 'studies', `${study}.yaml`);
  const command = [join(root, 'bin', 'pulsewright.js'), 'scan', path, ...over, '--together', '--out', base];
  execFileSync(process.execPath, command, { stdio: ['ignore', 'ignore', 'inherit'] });
  const lines = readFileSync(`${base}.csv`, 'utf8').split('\n');
  const [head, ...rows] = lines
    .filter((line) => line !== '' && !line.startsWith('#'))
    .map((l) => l.split(','));
  return (column) => rows.map((row) => Number(row[head.indexOf(column)]));
}

const width = `tones.0.fwhm=${SHORTEST} ps..${LONGEST} ps:${POINTS}:log`;
const area = `tones.0.area=${twoPhotonPi(SHORTEST)} pi..${twoPhotonPi(LONGEST)} pi:${POINTS}:log`;
try {
  const cascade = scanned('two-photon-pi', [width, area]);
  const twoLevel = scanned('resonant-pi', [width]);
  const widths = cascade('pulse.tones.0.fwhm [ps]');
  const columns: Record<string, number[]> = {
    'two-photon, counted bare (emitted, one polarisation)': cascade('emitted.g2'),
    'two-photon, behind a 20 GHz filter (filtered)': cascade('filtered.g2'),
    'resonant two-level emitter (emitted)': twoLevel('emitted.g2'),
    // Derived: Rayleigh light of the far-detuned drive, in one polarisation.
    'floor of bare counting, 2πħγ/E_b': widths.map(() => (2 * Math.PI * HBAR) / (LIFETIME * BINDING)),
  };
  const names = Object.keys(columns);
  const rows = widths.map((w, i) => [w, ...names.map((name) => columns[name][i])].join(','));
  const quoted = ['width [ps]', ...names].map((name) => (name.includes(',') ? `"${name}"` : name));
  mkdirSync(docs, { recursive: true });
  const head = '# pulsewright: g2[0] against pulse width; made by npm run docs:scaling';
  writeFileSync(join(docs, 'two-photon-scaling.csv'), `${[head, quoted.join(','), ...rows].join('\n')}\n`);
  const picture = await plotSeries({
    title: 'Two-photon excitation against a resonant π pulse',
    subtitle:
      'Gaussian pulses, lifetimes 400 ps and 200 ps, binding energy 5 meV, no phonons, accuracy quoted',
    xTitle: 'pulse width, intensity FWHM (ps)',
    yTitle: 'g⁽²⁾[0] per pulse',
    logX: true,
    logY: true,
    series: names.map((name) => ({ name, points: widths.map((x, i) => ({ x, y: columns[name][i] })) })),
  });
  writeFileSync(join(docs, 'two-photon-scaling.svg'), picture);
  const slope = (values: number[], from: number, to: number) =>
    (Math.log(values[to] / values[from]) / Math.log(widths[to] / widths[from])).toFixed(2);
  const third = Math.floor(POINTS / 3);
  for (const name of names) {
    const [short, long] = [slope(columns[name], 0, third), slope(columns[name], third, POINTS - 1)];
    const at = [0, third, POINTS - 1].map((i) => `${widths[i].toFixed(1)} ps`);
    console.log(`${name}: exponent ${short} from ${at[0]} to ${at[1]}, ${long} from ${at[1]} to ${at[2]}`);
  }
} finally {
  rmSync(scratch, { recursive: true, force: true });
}
