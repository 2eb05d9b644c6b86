import { stream } from '../../core/numerics/stream.js';
import { compareReplies } from './compare.js';
import {
  FAILED,
  GRADIENT_COST,
  type Method,
  type Reply,
  type Request,
  type Setup,
  type Steps,
  type Trial,
} from './contract.js';

/** A search under way: plain data, JSON without loss. */
export interface SessionState {
  readonly method: string;
  readonly setup: Setup;
  readonly replies: readonly Reply[];
}

const clean = (value: number) => (Number.isFinite(value) ? value : FAILED);

function checkSetup(method: Method, setup: Setup): void {
  const { name, traits } = method;
  if (traits.objectives === 'one' && setup.objectives !== 1) {
    throw new Error(`${name}: got ${setup.objectives} objectives; it takes one`);
  }
  if (setup.constraints > 0 && !traits.constraints) {
    throw new Error(`${name}: got ${setup.constraints} constraints; it takes none`);
  }
  for (const start of setup.start) {
    if (start.length !== setup.space.dimension || !start.every((u) => u >= 0 && u <= 1)) {
      throw new Error(`${name}: a start must have ${setup.space.dimension} coordinates within 0 and 1`);
    }
  }
}

/**
 * Drives one method by ask and tell and keeps its budget to the evaluation. `state` is all it takes to go on later:
 * resuming replays the replies, which costs no evaluation.
 */
export class Session {
  readonly #method: Method;
  readonly #setup: Setup;
  readonly #replies: Reply[] = [];
  readonly #steps: Steps<void>;
  #pending: readonly Trial[] = [];
  #gradient = false;
  #spent = 0;

  constructor(method: Method, setup: Setup) {
    checkSetup(method, setup);
    this.#method = method;
    this.#setup = structuredClone(setup) as Setup;
    this.#steps = method.run(this.#setup, stream(setup.seed, 0));
    this.#take(setup.budget > 0 ? this.#steps.next() : { done: true, value: undefined });
  }

  /** The trials to evaluate next; empty when the method has ended or its budget is spent. */
  ask(): readonly Trial[] {
    return this.#pending;
  }

  /** Whether exact derivatives are wanted at the trial asked for, whose value is known already. */
  get gradient(): boolean {
    return this.#gradient;
  }

  /** Evaluations that the trials asked for count as. */
  get cost(): number {
    return this.#gradient ? GRADIENT_COST : this.#pending.length;
  }

  /** Evaluations told so far. */
  get spent(): number {
    return this.#spent;
  }

  /** The replies to all trials of the last `ask`, in their order. Returns them with failures made finite. */
  tell(replies: readonly Reply[]): readonly Reply[] {
    if (replies.length !== this.#pending.length) {
      throw new Error(
        `${this.#method.name}: got ${replies.length} replies to ${this.#pending.length} trials`,
      );
    }
    if (replies.length === 0) return [];
    this.#spent += this.cost;
    const cleaned = replies.map((reply) => ({
      objectives: reply.objectives.map(clean),
      constraints: reply.constraints.map(clean),
      ...(reply.gradients?.every((row) => row.every(Number.isFinite)) ? { gradients: reply.gradients } : {}),
    }));
    for (const reply of cleaned) this.#replies.push(reply);
    if (this.#spent >= this.#setup.budget) this.#pending = [];
    else this.#take(this.#steps.next(cleaned));
    return cleaned;
  }

  state(): SessionState {
    return { method: this.#method.name, setup: this.#setup, replies: [...this.#replies] };
  }

  #take(step: IteratorResult<Request, void>): void {
    const left = this.#setup.budget - this.#spent;
    this.#gradient = false;
    if (step.done === true) this.#pending = [];
    else if ('gradientAt' in step.value) {
      this.#gradient = left >= GRADIENT_COST;
      this.#pending = this.#gradient ? [[...step.value.gradientAt]] : [];
    } else this.#pending = step.value.slice(0, left).map((trial) => [...trial]);
  }
}

/** A session that goes on where `state` was taken. `method` must be the one that the state names. */
export function resumeSession(method: Method, state: SessionState): Session {
  if (state.method !== method.name)
    throw new Error(`got ${method.name}; the state is one of ${state.method}`);
  const session = new Session(method, state.setup);
  for (let told = 0; told < state.replies.length; ) {
    const count = session.ask().length;
    if (count === 0) throw new Error(`${method.name}: the state has more replies than the method asks for`);
    session.tell(state.replies.slice(told, told + count));
    told += count;
  }
  return session;
}

/** One evaluated trial. */
export interface TrialResult {
  readonly x: Trial;
  readonly reply: Reply;
}

/** What a run of a method leaves behind. */
export interface Optimized {
  /** Every evaluation in order, gradients left out. */
  readonly trace: readonly TrialResult[];
  /** The best one by the feasibility rules (of the first objective); null when nothing was evaluated. */
  readonly best: TrialResult | null;
  /** Gradients included. */
  readonly evaluations: number;
}

/**
 * Runs a method to its end or to the end of its budget.
 * @param evaluate is told whether exact derivatives are wanted; only where `setup.gradient` allows them
 */
export function optimize(
  method: Method,
  setup: Setup,
  evaluate: (x: Trial, gradient: boolean) => Reply,
): Optimized {
  return optimizeInBatches(method, setup, (trials, gradient) => trials.map((x) => evaluate(x, gradient)));
}

/** The same for an evaluation that takes all trials of a request at once, and gives their replies in their order. */
export function optimizeInBatches(
  method: Method,
  setup: Setup,
  evaluateMany: (trials: readonly Trial[], gradient: boolean) => readonly Reply[],
): Optimized {
  const session = new Session(method, setup);
  const trace: TrialResult[] = [];
  let best: TrialResult | null = null;
  for (let asked = session.ask(); asked.length > 0; asked = session.ask()) {
    const { gradient } = session;
    const copies = asked.map((x) => [...x]);
    const replies = session.tell(evaluateMany(copies, gradient));
    if (gradient) continue;
    for (const [i, reply] of replies.entries()) {
      const result = { x: asked[i], reply };
      trace.push(result);
      if (best === null || compareReplies(reply, best.reply) < 0) best = result;
    }
  }
  return { trace, best, evaluations: session.spent };
}
