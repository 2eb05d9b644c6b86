import { describe, expect, it } from 'vitest';
import {
  FAILED,
  globalMethods,
  localMethods,
  type Method,
  optimize,
  type Reply,
  resumeSession,
  Session,
  type SessionState,
  type Setup,
  type Trial,
} from '../../optimizers/index.js';

// What the contract in optimizers/local/contract.ts promises, for every registered method (our own contract, no source).

const methods = [...localMethods.values(), ...globalMethods.values()];

function setupFor(method: Method, more: Partial<Setup> = {}): Setup {
  return {
    space: { dimension: 3, categories: [0, 0, 0] },
    objectives: method.traits.objectives === 'many' ? 2 : 1,
    constraints: method.traits.constraints ? 1 : 0,
    start: [[0.2, 0.9, 0.5]],
    seed: 11,
    budget: 150,
    ...more,
  };
}

/** A bowl off the centre, against a line; a constraint that cuts the bowl's bottom off. */
function bowl(setup: Setup): (x: Trial) => Reply {
  return (x) => {
    const near = (x[0] - 0.31) ** 2 + (x[1] - 0.72) ** 2 + (x[2] - 0.11) ** 2;
    return {
      objectives: setup.objectives === 2 ? [near, x[0] + x[1]] : [near],
      constraints: setup.constraints === 1 ? [0.5 - x[0]] : [],
    };
  };
}

function freeze<T>(value: T): T {
  if (typeof value === 'object' && value !== null) {
    for (const part of Object.values(value)) freeze(part);
    Object.freeze(value);
  }
  return value;
}

describe.each(methods.map((method) => [method.name, method] as const))('%s', (_name, method) => {
  it('keeps the bounds and the budget to the evaluation, and leaves its input untouched', () => {
    const setup = freeze(setupFor(method));
    const given = bowl(setup);
    const { trace, best } = optimize(method, setup, (x) => freeze(given(freeze(x))));
    expect(trace.length).toBeLessThanOrEqual(setup.budget);
    if (method.traits.stochastic) expect(trace.length).toBe(setup.budget);
    for (const { x } of trace) expect(x.every((u) => u >= 0 && u <= 1)).toBe(true);
    expect(best).not.toBeNull();
  });

  it.each([0, 1, 2, 7])('stops after exactly %i evaluations when that is the budget', (budget) => {
    const setup = setupFor(method, { budget });
    expect(optimize(method, setup, bowl(setup)).trace).toHaveLength(budget);
  });

  it('makes the same trace from the same seed, and another from another seed', () => {
    const setup = setupFor(method);
    const first = optimize(method, setup, bowl(setup)).trace;
    expect(optimize(method, setup, bowl(setup)).trace).toEqual(first);
    const other = { ...setup, seed: 12 };
    if (method.traits.stochastic) expect(optimize(method, other, bowl(other)).trace).not.toEqual(first);
  });

  it('takes NaN and infinities for failures and still ends, with the best of the real values', () => {
    const setup = setupFor(method, { constraints: 0, start: [[0.9, 0.9, 0.9]] });
    const broken = [Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
    const honest = bowl(setup);
    const { trace, best } = optimize(method, setup, (x) =>
      x[0] < 0.45
        ? { objectives: honest(x).objectives.map((_, i) => broken[i]), constraints: [] }
        : honest(x),
    );
    expect(best?.x[0]).toBeGreaterThanOrEqual(0.45);
    for (const { reply } of trace) expect(reply.objectives.every(Number.isFinite)).toBe(true);
  });

  it('ends or spends its budget when every value fails', () => {
    const setup = setupFor(method);
    const constraints = new Array<number>(setup.constraints).fill(Number.NaN);
    const objectives = new Array<number>(setup.objectives).fill(Number.NaN);
    const { trace } = optimize(method, setup, () => ({ objectives, constraints }));
    expect(trace.length).toBeGreaterThan(0);
    expect(trace.every(({ reply }) => reply.objectives[0] === FAILED)).toBe(true);
  });

  it('ends or spends its budget on a constant function', () => {
    const setup = setupFor(method, { constraints: 0 });
    const objectives = new Array<number>(setup.objectives).fill(2.5);
    const { trace, best } = optimize(method, setup, () => ({ objectives, constraints: [] }));
    expect(trace.length).toBeGreaterThan(0);
    expect(best?.reply.objectives[0]).toBe(2.5);
  });

  it.runIf(method.traits.constraints)('comes near the least violation of an infeasible problem', () => {
    const setup = setupFor(method, { budget: 600 });
    const { best } = optimize(method, setup, (x) => ({
      objectives: bowl(setup)(x).objectives,
      constraints: [0.1 + (x[1] - 0.4) ** 2],
    }));
    expect(best?.reply.constraints[0]).toBeLessThan(0.1 + 1e-3);
  });

  it('goes on from a saved state as if it had never stopped', () => {
    const setup = setupFor(method);
    const given = bowl(setup);
    const whole = optimize(method, setup, given).trace;
    for (const pause of [1, 3, 10]) {
      let session = new Session(method, setup);
      for (let step = 0; session.ask().length > 0; step++) {
        if (step === pause) {
          const saved = JSON.parse(JSON.stringify(session.state())) as SessionState;
          session = resumeSession(method, saved);
        }
        session.tell(session.ask().map(given));
      }
      expect(session.state().replies).toEqual(whole.map(({ reply }) => reply));
    }
  });

  it('keeps a list coordinate on its list', () => {
    const space = { dimension: 3, categories: [0, 4, 0] };
    const setup = setupFor(method, { space, start: [[0.2, 0.625, 0.5]] });
    const { trace } = optimize(method, setup, bowl(setup));
    const bins = new Set(trace.map(({ x }) => x[1]));
    for (const bin of bins) expect([0.125, 0.375, 0.625, 0.875]).toContain(bin);
    expect(bins.size > 1).toBe(method.traits.discrete);
  });

  it('leaves Math.random as it was', () => {
    const original = Math.random;
    const setup = setupFor(method, { budget: 40 });
    optimize(method, setup, (x) => {
      expect(Math.random).toBe(original);
      return bowl(setup)(x);
    });
    expect(Math.random).toBe(original);
  });

  it('refuses a start outside the cube, and what its traits rule out', () => {
    expect(() => new Session(method, setupFor(method, { start: [[0.2, 1.1, 0.5]] }))).toThrow('start');
    if (method.traits.objectives === 'one') {
      expect(() => new Session(method, setupFor(method, { objectives: 2 }))).toThrow('got 2 objectives');
    }
    if (!method.traits.constraints) {
      expect(() => new Session(method, setupFor(method, { constraints: 1 }))).toThrow('got 1 constraints');
    }
  });
});
