import type { Goal, Restarts } from '../../optimizers/index.js';
import { type Explanation, type FrontPart, percent } from '../run/explain/explanation.js';
import { readable } from '../run/parameters.js';
import { symbolOf } from './labels.js';
import { threeDigits } from './numbers.js';
import { bold, tableText } from './table.js';
import { boundText, thirdText } from './third.js';

/** What the stages of the default strategy do, by the first word of their names. */
const KINDS: Readonly<Record<string, string>> = {
  explore: 'populations',
  scatter: 'even sampling',
  scan: 'even sampling',
  enumerate: 'every combination',
  look: 'even sampling',
  cross: 'looks along one variable',
  race: 'local solves',
  probe: 'local solves',
  polish: 'local solves',
  second: 'local solves',
  sweep: 'local solves',
  refine: 'local solves',
  spread: 'local solves',
  tighten: 'local solves',
  fill: 'interpolation',
  levels: 'interpolation',
};

/** `slice-2/polish-1` → `local solves`; a name of another strategy stands for itself. */
function kindOf(stage: string): string {
  const own = stage.slice(stage.lastIndexOf('/') + 1);
  return KINDS[own.split('-')[0]] ?? own.replace(/(-\d+)+$/, '');
}

function foundBy({ stages }: FrontPart): string {
  const kinds = [...new Set(stages.map(({ name }) => kindOf(name)))];
  const count = (kind: string) =>
    stages.filter(({ name }) => kindOf(name) === kind).reduce((sum, { designs }) => sum + designs, 0);
  return kinds.map((kind) => `${kind} ${count(kind)}`).join(', ');
}

function partsTable(parts: readonly FrontPart[], goal: Goal, color: boolean): string {
  const axis = thirdText(goal);
  const rows = parts.map((part) => [
    ...(axis === null ? [] : [boundText(goal, part.slice)]),
    part.from === part.to ? threeDigits(part.from) : `${threeDigits(part.from)} to ${threeDigits(part.to)}`,
    String(part.designs),
    part.branch,
    foundBy(part),
  ]);
  const brightness = `${symbolOf(goal.brightness)}, signal`;
  const head = [...(axis === null ? [] : [axis.name]), brightness, 'designs', 'excitation', 'found by'];
  const last = head.length - 1;
  return tableText({ head, rows, left: [0, ...(axis === null ? [] : [1]), last - 1, last] }, color);
}

const counted = ({ elsewhere, again }: Restarts): string =>
  `${again} of ${elsewhere} local solve${elsewhere === 1 ? '' : 's'} that began elsewhere`;

function againLines({ restarts }: Explanation): string[] {
  const { all, best } = restarts;
  if (all === null) return ['found again: not told: the method makes no local solves'];
  return [
    ...(best === null ? [] : [`best design: ${counted(best)} came to it (within 1 %)`]),
    `whole front: ${counted(all)} came to it`,
  ];
}

function growthLine({ growth }: Explanation): string {
  if (growth === null) return 'twice the budget: not told: too few stages for an estimate';
  const { byDoubling, lastHalf, quarterBefore } = growth;
  if (byDoubling === null)
    return 'twice the budget: not told: the first half of this one found nothing of the front';
  const [least, most] = [percent(byDoubling.least), percent(byDoubling.most)];
  const gain = least === most ? `about ${most}` : `${least} to ${most}`;
  return [
    `twice the budget: ${gain} more hypervolume (an estimate: the second half of this budget gave ${percent(lastHalf)},`,
    `  the quarter before it ${percent(quarterBefore)})`,
  ].join('\n');
}

/** Ranges that the search would leave if it could. */
function endLines({ ends, parts }: Explanation): string[] {
  const total = parts.reduce((sum, { designs }) => sum + designs, 0);
  if (ends.length === 0) return [];
  return [
    'at the end of a range (a wider one may give better designs):',
    ...ends.map(({ path, value, end, designs }) => {
      const side = end === 'from' ? 'lower' : 'upper';
      return `  ${path}: at the ${side} end, ${readable(value, path)}, in ${designs} of ${total}`;
    }),
  ];
}

/** How the front was found, as a user reads it at the end of a run. */
export function explanationText(explanation: Explanation, goal: Goal, color: boolean): string {
  const { doubts } = explanation;
  return [
    bold('how the front was found', color),
    partsTable(explanation.parts, goal, color),
    '',
    ...againLines(explanation),
    growthLine(explanation),
    ...endLines(explanation),
    ...(doubts.length === 0
      ? []
      : [
          bold('the front is probably not converged:', color),
          ...doubts.map((doubt) => `  ${doubt}`),
          '  more search.evaluations, or another search.seed, would tell',
        ]),
  ].join('\n');
}
