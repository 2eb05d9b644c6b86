import type { FrontFile } from '../run/read-front.js';
import { figureLabel } from './labels.js';
import { threeDigits } from './numbers.js';
import { plotSeries } from './plots/series.js';
import { tableText } from './table.js';

export const COMPARE_FORMAT = 'pulsewright.compare/1';

/** Fronts of the same figures side by side. */
export interface Comparison {
  readonly fronts: readonly FrontFile[];
  /** What each is called: its title, with the directory where two have the same one. */
  readonly names: readonly string[];
  /** Brightness levels between the ends of all fronts. */
  readonly levels: readonly number[];
  /** `impurity[i][k]`: least impurity of front k's designs that reach level i. */
  readonly impurity: readonly (readonly number[])[];
  /** In what the fronts differ besides their designs. */
  readonly notes: readonly string[];
}

const MOST_LEVELS = 12;
/** Quoted figures may miss the level that the search had them at by this much. */
const SLACK = 1e-6;

/** Levels that were asked of any front, between the ends of all of them; evenly thinned. */
function commonLevels(fronts: readonly FrontFile[]): number[] {
  if (fronts.some(({ points }) => points.length === 0)) return [];
  const low = Math.max(...fronts.map(({ points }) => Math.min(...points.map((p) => p.level))));
  const high = Math.min(...fronts.map(({ points }) => points[points.length - 1].brightness));
  const all = [...new Set(fronts.flatMap(({ points }) => points.map((p) => p.level)))];
  const inside = all.filter((l) => l >= low && l <= high * (1 + SLACK)).sort((a, b) => a - b);
  if (inside.length <= MOST_LEVELS) return inside;
  const step = (inside.length - 1) / (MOST_LEVELS - 1);
  return Array.from({ length: MOST_LEVELS }, (_, i) => inside[Math.round(i * step)]);
}

function namesOf(fronts: readonly FrontFile[]): string[] {
  return fronts.map(({ title, directory }) => {
    if (title === '') return directory;
    return fronts.filter((f) => f.title === title).length > 1 ? `${title} (${directory})` : title;
  });
}

function notesOf(fronts: readonly FrontFile[], names: readonly string[]): string[] {
  const notes: string[] = [];
  const differ = (what: string, text: (front: FrontFile) => string) => {
    if (new Set(fronts.map(text)).size < 2) return;
    notes.push(`${what}: ${fronts.map((front, k) => `${names[k]}: ${text(front)}`).join('; ')}`);
  };
  differ('phonons differ', ({ phonons }) => phonons.join(', ') || '–');
  differ('filters differ', ({ filtered }) =>
    filtered === null ? '–' : filtered ? 'behind a filter' : 'none: scattered laser light counts as signal',
  );
  for (const [k, { third }] of fronts.entries()) {
    if (third !== null)
      notes.push(`${names[k]}: has a third axis (${third}); shown is its front without a bound on it`);
  }
  differ('made by different versions', ({ version }) => version);
  return notes;
}

/** The comparison of fronts that have the same figures in their goals. */
export function comparisonOf(fronts: readonly FrontFile[]): Comparison {
  const names = namesOf(fronts);
  const levels = commonLevels(fronts);
  const impurity = levels.map((level) =>
    fronts.map(({ points }) =>
      Math.min(...points.filter((p) => p.brightness >= level * (1 - SLACK)).map((p) => p.impurity)),
    ),
  );
  return { fronts, names, levels, impurity, notes: notesOf(fronts, names) };
}

export function comparisonPicture({ fronts, names }: Comparison): Promise<string> {
  const hidden = fronts.flatMap(({ points }) => points).filter((p) => !(p.impurity > 0)).length;
  const left = hidden === 0 ? '' : `; ${hidden} designs without impurity are not shown`;
  return plotSeries({
    title: 'Pareto fronts side by side',
    subtitle: `designs at accuracy quoted, phonons: ${[...new Set(fronts.flatMap((f) => f.phonons))].join(', ')}${left}`,
    xTitle: `brightness per pulse: ${figureLabel(fronts[0].brightness)}`,
    yTitle: `impurity per pulse: ${figureLabel(fronts[0].impurity)}`,
    logX: false,
    logY: true,
    series: fronts.map(({ points }, k) => ({
      name: names[k],
      points: points.map(({ brightness, impurity }) => ({ x: brightness, y: impurity })),
    })),
  });
}

/** Impurity of each front at the common levels, or what each front reaches where there are none. */
export function comparisonText(comparison: Comparison, color: boolean): string {
  const { fronts, names, levels, impurity, notes } = comparison;
  const { brightness, impurity: figure } = fronts[0];
  const keys = names.map((name, k) => `  ${k + 1}  ${name}`);
  const parts = [
    `${figureLabel(figure)}, of designs with ${figureLabel(brightness)}, of at least the level`,
    '',
  ];
  if (levels.length > 0) {
    const head = ['level', ...fronts.map((_, k) => `${k + 1}`)];
    const rows = levels.map((level, i) => [threeDigits(level), ...impurity[i].map(threeDigits)]);
    parts.push(tableText({ head, rows }, color));
  } else {
    const ends = (front: FrontFile) => front.points.map((p) => threeDigits(p.brightness));
    const reach = fronts.map((front, k) => {
      const all = ends(front);
      return `${k + 1}: ${all.length === 0 ? 'nothing' : `${all[0]} to ${all[all.length - 1]}`}`;
    });
    parts.push(`no level in common; brightness reached: ${reach.join('; ')}`);
  }
  parts.push('', ...keys, ...notes.map((note) => `note: ${note}`));
  return parts.join('\n');
}

/** The JSON document of a comparison. */
export function comparisonDocument({ fronts, names, levels, impurity, notes }: Comparison): unknown {
  return {
    format: COMPARE_FORMAT,
    goal: { impurity: fronts[0].impurity, brightness: fronts[0].brightness },
    fronts: fronts.map(({ directory, title, hash, version, phonons, points }, k) => ({
      ...{ name: names[k], directory, title, hash, version, phonons, points },
    })),
    levels: levels.map((level, i) => ({ level, impurity: impurity[i] })),
    notes,
  };
}
