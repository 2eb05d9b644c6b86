import type { Goal } from '../../optimizers/index.js';
import { csv } from '../run/csv.js';
import type { FinishedRun } from '../run/finished-run.js';
import { packageVersion } from '../run/package.js';
import { VERIFY_FORMAT, type VerifiedDesign } from '../run/verification.js';
import { symbolOf } from './labels.js';
import { threeDigits } from './numbers.js';
import { tableText } from './table.js';

const holds = ({ reasons }: VerifiedDesign): boolean => reasons.length === 0;

/** How the verified figures were made, in words. */
function methodOf(points: readonly VerifiedDesign[]): string {
  const methods = new Set(points.map(({ verified }) => verified.figures?.phonons.method));
  if (methods.has('exact')) return 'exact phonon method, depth and terms raised until they agree';
  return 'reference propagator alone, finer than quoted';
}

const yesNo = (value: boolean | null): string => (value === null ? '–' : value ? 'yes' : 'no');

/** A relative difference with its sign. */
function signed(value: number | null): string {
  if (value === null) return '–';
  return `${value > 0 ? '+' : ''}${value.toExponential(1)}`;
}

/** The document of verify.json and `--json`. */
export function verifyDocument(run: FinishedRun, goal: Goal, points: readonly VerifiedDesign[]): unknown {
  return {
    format: VERIFY_FORMAT,
    version: packageVersion(),
    run: { study_hash: run.hash, version: run.version },
    goal: {
      impurity: `collected.${goal.impurity}`,
      brightness: `signal.${goal.brightness}`,
      at_least: goal.atLeast,
    },
    method: methodOf(points),
    all_hold: points.every(holds),
    points: points.map((point) => ({
      design: point.file,
      level: point.level,
      holds: holds(point),
      reasons: point.reasons,
      meets_level: point.meetsLevel,
      accuracy: {
        kept: point.keepsAccuracy,
        stated: point.stated,
        found: point.found,
        measure: point.measure,
      },
      quoted: point.quoted,
      verified: point.verified,
      relative_difference: point.change,
    })),
  };
}

/** verify.csv: one line per design. */
export function verifyCsv(run: FinishedRun, goal: Goal, points: readonly VerifiedDesign[]): string {
  const [bright, impure] = [`signal.${goal.brightness}`, `collected.${goal.impurity}`];
  const columns = [
    ...['design', 'level', `quoted ${bright}`, `verified ${bright}`, `relative difference of ${bright}`],
    ...[`quoted ${impure}`, `verified ${impure}`, `relative difference of ${impure}`],
    ...['quoted phonons.method', 'verified phonons.method', 'verified accuracy.error_estimate'],
    ...['meets level', 'stated accuracy', 'difference found', 'accuracy kept', 'holds'],
  ];
  const rows = points.map((p) => [
    ...[p.file, p.level, p.quoted.brightness, p.verified.brightness, p.change.brightness],
    ...[p.quoted.impurity, p.verified.impurity, p.change.impurity],
    p.quoted.figures.phonons.method,
    p.verified.figures?.phonons.method ?? null,
    p.verified.figures?.accuracy.error_estimate ?? null,
    ...[yesNo(p.meetsLevel), p.stated, p.found],
    ...[p.keepsAccuracy === null ? null : yesNo(p.keepsAccuracy), yesNo(holds(p))],
  ]);
  const comments = [
    VERIFY_FORMAT,
    `study hash: ${run.hash}`,
    `quoted by pulsewright ${run.version}, verified by ${packageVersion()}: ${methodOf(points)}`,
    'relative difference: verified / quoted - 1',
  ];
  return csv(comments, columns, rows);
}

/** What the user reads: quoted against verified, and which points do not hold, with the reasons. */
export function verifyText(goal: Goal, points: readonly VerifiedDesign[], color: boolean): string {
  const [bright, impure] = [symbolOf(goal.brightness), symbolOf(goal.impurity)];
  const name = (file: string): string => file.replace(/^.*\//, '').replace('.yaml', '');
  const text = tableText(
    {
      head: [
        ...['design', 'level'],
        ...[`${bright}\nquoted`, `${bright}\nverified`, 'relative\ndifference'],
        ...[`${impure}\nquoted`, `${impure}\nverified`, 'relative\ndifference'],
        ...['meets\nlevel', 'accuracy\nkept'],
      ],
      rows: points.map((p) => [
        ...[name(p.file), threeDigits(p.level)],
        ...[
          threeDigits(p.quoted.brightness),
          threeDigits(p.verified.brightness),
          signed(p.change.brightness),
        ],
        ...[threeDigits(p.quoted.impurity), threeDigits(p.verified.impurity), signed(p.change.impurity)],
        ...[yesNo(p.meetsLevel), yesNo(p.keepsAccuracy)],
      ]),
    },
    color,
  );
  const broken = points.filter((point) => !holds(point));
  const worst = Math.max(...points.map((p) => p.verified.figures?.accuracy.error_estimate ?? 0));
  return [
    text,
    '',
    `brightness: signal ${bright}; impurity: collected ${impure}`,
    `verified: ${methodOf(points)}; largest estimated relative error ${worst.toExponential(1)}`,
    ...(broken.length === 0
      ? [`all ${points.length} points hold`]
      : [
          `${broken.length} of ${points.length} points do not hold:`,
          ...broken.map((p) => `  ${p.file}: ${p.reasons.join('; ')}`),
        ]),
  ].join('\n');
}
