import type { Stream } from '../../core/numerics/stream.js';
import type { Space } from '../problem/space.js';

/** Point of the unit cube. */
export type Trial = readonly number[];

/**
 * Answer to a trial; to a request for a gradient only `gradients` need be there. Every objective is minimised; a constraint is met when its
 * value is ≤ 0.
 */
export interface Reply {
  readonly objectives: readonly number[];
  readonly constraints: readonly number[];
  /** Exact first derivatives by each coordinate, where the evaluation has them: objectives, then constraints, in rows. */
  readonly gradients?: readonly (readonly number[])[];
}

/** Exact derivatives at a trial whose value is known, wanted of an evaluation that has them (`Setup.gradient`). */
export interface GradientRequest {
  readonly gradientAt: Trial;
}

/** What a method asks for in one go: the values at some trials, or one gradient. */
export type Request = readonly Trial[] | GradientRequest;

/** A part of a method's run. */
export type Steps<T> = Generator<Request, T, readonly Reply[]>;

/** Evaluations that an exact gradient counts as, on top of the one of its value. */
export const GRADIENT_COST = 2;

/** What a value that is NaN or infinite is taken for: finite, so that it survives JSON, and worse than every real one. */
export const FAILED = 1e300;

/** What a method can do; nobody branches on its name. */
export interface MethodTraits {
  readonly objectives: 'one' | 'many';
  /** Takes constraints into account. */
  readonly constraints: boolean;
  /** Searches list coordinates; otherwise it keeps them where the first start has them. */
  readonly discrete: boolean;
  /** Asks for several trials at once. */
  readonly batch: boolean;
  /** Uses first derivatives: exact ones where the evaluation has them, else differences of its own. */
  readonly gradient: boolean;
  /** Draws random numbers. */
  readonly stochastic: boolean;
}

/** What a method is set on: plain data. */
export interface Setup {
  readonly space: Space;
  /** Number of objectives. */
  readonly objectives: number;
  /** Number of constraints. */
  readonly constraints: number;
  /** Points of the unit cube to begin with; may be empty. */
  readonly start: readonly Trial[];
  readonly seed: number;
  /** Evaluations it may spend; for methods that plan ahead. The session keeps it to the evaluation. */
  readonly budget: number;
  /** Exact derivatives may be asked for; left out: they may not. */
  readonly gradient?: boolean;
}

/**
 * A search method: a generator that yields trials inside the unit cube and is sent one reply for each, or yields a
 * request for a gradient and is sent the reply that has it (or has none, where there is no exact one). It ends when it
 * has nothing more to gain. It is a pure function of setup, random stream and replies, so the log of replies is its
 * complete state: a session saves that and resumes by replaying it.
 */
export interface Method {
  readonly name: string;
  /** Where it is published. */
  readonly source: string;
  readonly traits: MethodTraits;
  readonly run: (setup: Setup, random: Stream) => Steps<void>;
}
