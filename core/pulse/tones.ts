import type { UniformTable } from '../numerics/index.js';
import type { DispersedEnvelope } from './dispersed.js';
import type { Envelope } from './envelope.js';
import type { ClosedEnvelope } from './shapes/contract.js';

/** One tone, ready to be added to a drive sample. */
export interface ToneSampler {
  /** Adds weight·Ω of the tone at time t (ps) to out[2c], out[2c+1] for each component c. */
  add(t: number, out: Float64Array): void;
  /** Upper bound of |Ω| of the tone between two times (ps), 1/ps. */
  bound(from: number, to: number): number;
}

/** Where a tone sits: Ω(t) = area·e^{i(phase − rate·t)}·env(t − delay), times one real weight per component. */
export interface TonePlacement {
  readonly area: number;
  readonly phase: number;
  /** Angular frequency minus the frame, 1/ps. */
  readonly rate: number;
  readonly delay: number;
  readonly weights: readonly number[];
}

/** Real weights per component, as plain fields for the inner loop. */
abstract class WeightedTone {
  readonly #first: number;
  readonly #second: number;
  readonly #two: boolean;

  constructor(weights: readonly number[]) {
    this.#first = weights[0];
    this.#second = weights.length > 1 ? weights[1] : 0;
    this.#two = weights.length > 1;
  }

  protected put(re: number, im: number, out: Float64Array): void {
    out[0] += this.#first * re;
    out[1] += this.#first * im;
    if (this.#two) {
      out[2] += this.#second * re;
      out[3] += this.#second * im;
    }
  }
}

/** A tone in closed form: one magnitude and, unless its phase stands still, one sine–cosine pair a sample. */
export class ClosedTone extends WeightedTone implements ToneSampler {
  readonly #magnitude: (t: number) => number;
  readonly #area: number;
  readonly #delay: number;
  readonly #phase: number;
  readonly #rate: number;
  readonly #chirp: number;
  readonly #cos: number;
  readonly #sin: number;
  readonly #still: boolean;

  constructor(closed: ClosedEnvelope, place: TonePlacement) {
    super(place.weights);
    this.#magnitude = closed.magnitude;
    this.#area = place.area;
    this.#delay = place.delay;
    this.#phase = (place.phase + closed.phase - place.rate * place.delay) % (2 * Math.PI);
    this.#rate = place.rate;
    this.#chirp = closed.chirp;
    this.#cos = Math.cos(this.#phase);
    this.#sin = Math.sin(this.#phase);
    this.#still = place.rate === 0 && closed.chirp === 0;
  }

  bound(from: number, to: number): number {
    const nearest = Math.max(from - this.#delay, Math.min(0, to - this.#delay));
    return Math.abs(this.#area) * this.#magnitude(nearest);
  }

  add(t: number, out: Float64Array): void {
    const s = t - this.#delay;
    const field = this.#area * this.#magnitude(s);
    if (this.#still) {
      this.put(field * this.#cos, field * this.#sin, out);
      return;
    }
    const angle = this.#phase - (this.#rate - this.#chirp * s) * s;
    this.put(field * Math.cos(angle), field * Math.sin(angle), out);
  }
}

/** A tone read from a table of its envelope; zero outside [start, end] (ps, about the tone's centre). */
export class TableTone extends WeightedTone implements ToneSampler {
  readonly #envelope: DispersedEnvelope;
  readonly #table: UniformTable;
  readonly #start: number;
  readonly #end: number;
  readonly #area: number;
  readonly #delay: number;
  readonly #phase: number;
  readonly #rate: number;
  readonly #value = new Float64Array(2);

  constructor(envelope: DispersedEnvelope, place: TonePlacement) {
    super(place.weights);
    this.#envelope = envelope;
    this.#table = envelope.table;
    this.#start = envelope.start;
    this.#end = envelope.end;
    this.#area = place.area;
    this.#delay = place.delay;
    this.#phase = (place.phase - place.rate * place.delay) % (2 * Math.PI);
    this.#rate = place.rate;
  }

  bound(from: number, to: number): number {
    return Math.abs(this.#area) * this.#envelope.bound(from - this.#delay, to - this.#delay);
  }

  add(t: number, out: Float64Array): void {
    const s = t - this.#delay;
    if (s < this.#start || s > this.#end) return;
    const value = this.#value;
    this.#table.read(s, value);
    const angle = this.#phase - this.#rate * s;
    const re = this.#area * Math.cos(angle);
    const im = this.#area * Math.sin(angle);
    this.put(re * value[0] - im * value[1], re * value[1] + im * value[0], out);
  }
}

/** The sampler of a tone from its envelope. */
export function toneSampler(envelope: Envelope, place: TonePlacement): ToneSampler {
  const { form } = envelope;
  return form.kind === 'closed' ? new ClosedTone(form.closed, place) : new TableTone(form.dispersed, place);
}
