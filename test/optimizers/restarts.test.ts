import { describe, expect, it } from 'vitest';
import { createProblem } from '../../optimizers/index.js';
import { Knowledge } from '../../optimizers/stages/contract.js';
import { restartsOf } from '../../optimizers/stages/restarts.js';
import type { Solution } from '../../optimizers/tasks/solve.js';
import { range, toyEvaluate, toySpec } from './toy.js';

// Counted by hand on made-up solves; the member of the archive has impurity 1e-3-like figures of the stand-in.

const PARAMETERS = [
  range('pulse.tones.0.fwhm', 1, 10),
  { kind: 'list', path: 'pulse.tones.0.gdd', values: [0, 10] } as const,
];

function known() {
  const spec = toySpec(100, 1, PARAMETERS);
  const problem = createProblem(spec, toyEvaluate);
  const all = new Knowledge(spec, problem);
  const { values, figures } = problem.evaluate([0.5, 0.25]);
  all.absorb({ id: '0-explore-1', evaluations: 1, points: [{ values, figures: figures! }], summary: null });
  const [member] = all.front;
  const solve = (start: number[], end: number[], factor: number, level = member.brightness): Solution => ({
    ...{ level, start, x: end, violation: 0, exact: false },
    ...{ impurity: factor * member.impurity, brightness: member.brightness },
  });
  return { all, solve };
}

const HERE = [0.5, 0.25];

describe('restarts', () => {
  it('count solves from elsewhere, and of them those that came within 1 % of the front', () => {
    const { all, solve } = known();
    all.solutions.push(
      solve([0.1, 0.25], HERE, 1.005),
      solve([0.9, 0.25], [0.8, 0.25], 1.5),
      // Too near to say anything; another entry of the list, from which no solve comes back.
      solve([0.55, 0.25], HERE, 1),
      solve([0.1, 0.75], [0.1, 0.75], 2),
    );
    expect(restartsOf(all, null)).toEqual({ elsewhere: 2, again: 1 });
  });

  it('take solves that carry one another on as one', () => {
    const { all, solve } = known();
    all.solutions.push(solve([0.1, 0.25], [0.3, 0.25], 1.5), solve([0.3, 0.25], HERE, 1));
    expect(restartsOf(all, null)).toEqual({ elsewhere: 1, again: 1 });
  });

  it('are told for one level, and not at all without solves at it', () => {
    const { all, solve } = known();
    all.solutions.push(solve([0.1, 0.25], HERE, 1, 0.1));
    expect(restartsOf(all, 0.1)).toEqual({ elsewhere: 1, again: 1 });
    expect(restartsOf(all, 0.2)).toBeNull();
  });
});
