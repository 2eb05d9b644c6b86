import { globalMethods } from '../global/registry.js';
import { violation } from '../local/compare.js';
import type { Method, Reply, Setup } from '../local/contract.js';
import { localMethods } from '../local/registry.js';
import { resumeSession } from '../local/session.js';
import type { GradientRows } from '../problem/gradient.js';
import { objectivesOf } from '../problem/judge.js';
import type { Candidate } from '../problem/problem.js';
import type { TaskRunner } from './contract.js';

/** Goes on with one method from the replies it has had. */
export interface MethodInput {
  readonly method: string;
  /** Brightness that a method for one objective has to reach; null for methods that take many. */
  readonly level: number | null;
  readonly setup: Setup;
  readonly replies: readonly Reply[];
}

export interface MethodSummary {
  /** The new ones. */
  readonly replies: readonly Reply[];
  /** The method has nothing more to ask. */
  readonly ended: boolean;
  /** Evaluations spent, gradients included. */
  readonly spent: number;
}

/** A method by its name in either registry; throws when there is none. */
export function methodNamed(name: string): Method {
  const method = localMethods.get(name) ?? globalMethods.get(name);
  if (method === undefined) {
    const known = [...localMethods.keys(), ...globalMethods.keys()].join(', ');
    throw new Error(`search.method: got ${name}; needs auto or one of ${known}`);
  }
  return method;
}

/** Weight of violations against the impurity, for a method that takes no constraints. */
const PENALTY = 100;

/** What a candidate is to a method; `level` null = all objectives of the goal. */
export function replyFor(method: Method, level: number | null, candidate: Candidate): Reply {
  const { impurity, brightness, constraints } = candidate;
  if (level === null) return { objectives: objectivesOf(candidate), constraints };
  const all = [level - brightness, ...constraints];
  if (method.traits.constraints) return { objectives: [impurity], constraints: all };
  return {
    objectives: [impurity + PENALTY * violation({ objectives: [], constraints: all })],
    constraints: [],
  };
}

/** The derivatives of that reply, from those of impurity, brightness and limits; none where a penalty bends it. */
function gradientsFor(method: Method, level: number | null, rows: GradientRows): GradientRows | null {
  const [impurity, brightness, ...constraints] = rows;
  const dark = brightness.map((d) => -d);
  if (level !== null && !method.traits.constraints) return null;
  return [impurity, dark, ...constraints];
}

export const methodTask: TaskRunner = (task, { recorder }): MethodSummary => {
  const { method: name, level, setup, replies } = task.input as MethodInput;
  const method = methodNamed(name);
  const slopesAt = (x: readonly number[]): Reply => {
    const rows = recorder.differentiate(x);
    const gradients = rows && gradientsFor(method, level, rows);
    return { objectives: [], constraints: [], ...(gradients ? { gradients } : {}) };
  };
  const session = resumeSession(method, { method: name, setup, replies });
  for (let asked = session.ask(); asked.length > 0; asked = session.ask()) {
    // A batch is answered whole or not at all: what is left returns to the stage.
    if (recorder.evaluations + session.cost > task.budget) break;
    const answers = session.gradient
      ? asked.map(slopesAt)
      : recorder.evaluateMany(asked).map((candidate) => replyFor(method, level, candidate));
    session.tell(answers);
  }
  const news = session.state().replies.slice(replies.length);
  return { replies: news, ended: session.ask().length === 0, spent: recorder.evaluations };
};
