/**
 * Brightness against pulse area for a resonant pulse and for both signs of chirp, without and with phonons: scans of
 * the bundled study `phonons` by the built command, one table, one picture. Without phonons both signs of chirp are one
 * curve and beat the resonant pulse; with them they part.
 *
 *   npm run docs:phonons          writes docs/phonons.csv and docs/phonons.svg (a minute or two)
 */
import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { plotSeries } from '../cli/report/plots/series.js';

const root = fileURLToPath(new URL('..', import.meta.url));
const docs = join(root, 'docs');
const study = join(root, 'cli', 'study', 'starters', 'phonons.yaml');
const scratch = mkdtempSync(join(tmpdir(), 'pulsewright-phonons-'));
const POINTS = 18;

/** Areas (π) and the mean brightness over the study's drift. */
function scanned(dispersion: number, phonons: boolean): { area: number[]; brightness: number[] } {
  const base = join(scratch, `scan${dispersion}${phonons}`);
  const sets = [
    `pulse.tones.0.gdd=${dispersion} ps^2`,
    ...(phonons ? [] : ['emitter.phonons.coupling=0 ps^2']),
  ];
  const command = [
    ...[join(root, 'bin', 'pulsewright.js'), 'scan', study, '--out', base],
    ...['--over', `tones.0.area=0.6 pi..4 pi:${POINTS}`, '--accuracy', 'search'],
    ...sets.flatMap((set) => ['--set', set]),
  ];
  execFileSync(process.execPath, command, { stdio: ['ignore', 'ignore', 'inherit'] });
  const lines = readFileSync(`${base}.csv`, 'utf8').split('\n');
  const [head, ...rows] = lines.filter((l) => l !== '' && !l.startsWith('#')).map((l) => l.split(','));
  const column = (name: string) => rows.map((row) => Number(row[head.indexOf(name)]));
  return { area: column('pulse.tones.0.area [pi]'), brightness: column('signal.single') };
}

try {
  const scans = [
    { name: 'no phonons: chirp of either sign', ...scanned(8, false) },
    { name: 'no phonons: resonant', ...scanned(0, false) },
    { name: '4 K: chirp +8 ps²', ...scanned(8, true) },
    { name: '4 K: resonant', ...scanned(0, true) },
    { name: '4 K: chirp −8 ps²', ...scanned(-8, true) },
  ];
  const mirrored = scanned(-8, false).brightness;
  const apart = Math.max(...mirrored.map((b, i) => Math.abs(b - scans[0].brightness[i])));
  if (apart > 1e-6) throw new Error(`without phonons the two signs differ by ${apart}`);
  const [{ area }] = scans;
  const rows = area.map((x, i) => [x, ...scans.map(({ brightness }) => brightness[i])].join(','));
  mkdirSync(docs, { recursive: true });
  const head =
    '# pulsewright: signal.single against pulse area, mean over 15 % drift of it; made by npm run docs:phonons';
  const names = ['area [pi]', ...scans.map(({ name }) => name)].join(',');
  writeFileSync(join(docs, 'phonons.csv'), `${[head, names, ...rows].join('\n')}\n`);
  const picture = await plotSeries({
    title: 'The sign of the chirp matters only with phonons',
    subtitle:
      'Gaussian pulse of 2.5 ps, efficiency 0.65, mean over 15 % drift of the area, phonons by the second-order method, A = 0.03 ps², cutoff 2.2 1/ps',
    xTitle: 'pulse area before dispersion (π)',
    yTitle: 'P(n=1), signal, mean over drift',
    logX: false,
    logY: false,
    series: scans.map(({ name, brightness }) => ({
      name,
      points: area.map((x, i) => ({ x, y: brightness[i] })),
    })),
  });
  writeFileSync(join(docs, 'phonons.svg'), picture);
  for (const { name, brightness } of scans) {
    const best = Math.max(...brightness);
    console.log(`${name}: at most ${best.toFixed(4)}, at ${area[brightness.indexOf(best)].toFixed(2)} π`);
  }
} finally {
  rmSync(scratch, { recursive: true, force: true });
}
