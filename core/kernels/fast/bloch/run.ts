import { axisOf, resonantAxes, turnAbout, turnAxes } from './axes.js';
import { phaseAt } from './frame.js';
import { planarVectors, spatialVectors } from './magnus.js';
import { BLOCK, NODES } from './nodes.js';
import { energyAt, gapPace, paceOf, shrink } from './pace.js';
import type { BlochProblem, BlochSpan } from './problem.js';
import { sampleDrive } from './sampled.js';
import { begin, finish, kickAll, kickCorrected, type State } from './state.js';
import { addComplex, fillReal } from './table.js';
import type { Block, Tape } from './tape.js';

const samples = new Float64Array(2 * NODES * BLOCK);
const turns = new Float64Array(BLOCK);
const vectors = new Float64Array(3 * BLOCK);
const edges = new Float64Array(2 * BLOCK);
const axes = new Float64Array(3 * (BLOCK + 1));
const pulls = new Float64Array(4 * (BLOCK + 1));
const pulling = { edges, out: pulls };
const quaternions = new Float64Array(4 * BLOCK);
const block: Block = { samples, turns, vectors, quaternions, axes };

/**
 * Propagates a problem with so many steps per span and writes its figures (figures.ts).
 * @param tape records the run for a reverse sweep
 */
export function runBloch(
  problem: BlochProblem,
  counts: readonly number[],
  out: Float64Array,
  tape: Tape | null = null,
): void {
  const { model, spans } = problem;
  const state = begin(problem);
  tape?.rewind();
  axisOf(state.q, axes);
  for (let index = 0; index < spans.length; index++) {
    const part = spans[index];
    const { span, frame } = part;
    if (span.gap) {
      turnAbout(state.q, model.energy * (span.end - span.start));
      axisOf(state.q, axes);
      const pace = gapPace(problem, part);
      tape?.begin(part, 0, pace, STILL, false, axes);
      kickAll(state, pace.half, axes, 0, 1);
      continue;
    }
    if (index > 0) turnAbout(state.q, phaseAt(frame, span.start));
    axisOf(state.q, axes);
    propagate(problem, state, part, counts[index], tape);
    if (index + 1 < spans.length) turnAbout(state.q, -phaseAt(frame, span.end));
  }
  finish(state, out);
}

const STILL = { first: 0, slope: 0, axial: 0 };

function propagate(
  problem: BlochProblem,
  state: State,
  part: BlochSpan,
  count: number,
  tape: Tape | null,
): void {
  const { drive, model } = problem;
  const { span, frame, source } = part;
  const pace = paceOf(problem, part, count);
  const { h, scale, quartic, axial, half, full, correction } = pace;
  const slope = 2 * frame.chirp * h * h;
  const first = energyAt(model.energy, frame, h, span.start + 0.5 * h);
  const resonant = source.kind === 'real' && slope === 0 && Math.abs(first) * count < 1e-13;
  const own = source.kind === 'sampled' && source.follow ? turns : null;
  const pull = correction ? pulling : null;
  const record = tape ? quaternions : null;
  const width = source.kind === 'real' ? 1 : 2;
  tape?.begin(part, count, pace, { first, slope, axial }, own !== null, axes);
  kickAll(state, half, axes, 0, 1);
  for (let done = 0; done < count; done += BLOCK) {
    const steps = Math.min(BLOCK, count - done);
    const grid = { start: span.start + done * h, h };
    const energies = { first: first + done * slope, slope, axial };
    if (source.kind === 'real') {
      fillReal(source.tones[0], scale, grid, 0, steps, samples);
      if (quartic > 0) shrink(samples, quartic, 1, steps);
    } else {
      if (source.kind === 'sampled') {
        sampleDrive(drive, frame, scale, grid, 0, steps, span, own, samples);
      } else {
        samples.fill(0, 0, 2 * NODES * steps);
        for (const tone of source.tones) addComplex(tone, scale, grid, 0, steps, samples);
      }
      if (quartic > 0) shrink(samples, quartic, 2, steps);
    }
    if (resonant) {
      resonantAxes(samples, 0, steps, state.q, axes, pull, tape ? block : null);
    } else {
      if (source.kind === 'real') planarVectors(samples, energies, 0, steps, vectors, correction && edges);
      else spatialVectors(samples, energies, own, 0, steps, vectors, correction && edges);
      turnAxes(vectors, own, 0, steps, state.q, axes, pull, record);
    }
    tape?.keep(block, done, steps, width);
    const last = done + steps === count;
    const end = last ? steps : steps + 1;
    if (correction) kickCorrected(state, full, half, correction, axes, pulls, 1, end);
    else kickAll(state, full, axes, 1, end);
    if (last) kickAll(state, half, axes, steps, steps + 1);
  }
}
