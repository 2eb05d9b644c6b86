/**
 * Times the built package's counting in a bare Node process: a TypeScript loader rewrites what it loads, which costs half
 * the speed of the kernels. One JSON request a line, { design, order, kernel: 'fast' | 'reference' | 'gradient', seconds };
 * answers { elapsed, steps, values, plan } a line; elapsed is null where no kernel has derivatives.
 */
import { performance } from 'node:perf_hooks';
import { createInterface } from 'node:readline';
import { collectedDipoles } from '../../dist/core/emitter/generator.js';
import { countByReference, countPhotons } from '../../dist/core/kernels/count.js';
import { countWithGradient } from '../../dist/core/kernels/differentiate.js';
import { prepare } from '../../dist/core/kernels/fast/bloch/problem.js';
import { firstCounts } from '../../dist/core/kernels/fast/bloch/steps.js';
import { smoothSpans } from '../../dist/core/kernels/fast/spans.js';
import { asTwoLevel } from '../../dist/core/kernels/fast/two-level.js';
import { situation } from '../../dist/core/situation.js';
import { RAD_PER_PS_PER_GHZ } from '../../dist/core/units/constants.js';

/** What the C program counts too. */
const EMITTED = ['p0', 'p1', 'multiphoton', 'mean', 'factorial2'];

function requestOf({ design, order, tolerance }) {
  const { scheme, drive, frame, line } = situation(design);
  const { filter, polarization } = design.collection;
  const dipoles = collectedDipoles(scheme, 'exciton', polarization === 'h' ? 0 : 'all');
  const center = filter && line + filter.center * RAD_PER_PS_PER_GHZ - frame;
  const request = {
    scheme,
    dipoles,
    drive,
    frame,
    shift: 0,
    thinning: null,
    filter: filter && { kappa: filter.fwhm * RAD_PER_PS_PER_GHZ, center, order },
    effort: { tolerance, parts: 1, nodes: 1, series: 'estimate' },
  };
  return filter ? request : { ...request, wanted: EMITTED };
}

/** What a peer in another language needs to start from the same point; null for other traits. */
function planOf(request) {
  const model = request.filter ? null : asTwoLevel(request);
  const spans = model && smoothSpans(request.drive);
  if (!spans || spans.length > 1) return null;
  const problem = prepare(request, model, spans);
  const [{ span, frame, source }] = problem.spans;
  if (source.kind === 'sampled') return null;
  const { peakRabi, time } = request.drive.scales;
  const resonant = source.kind === 'real' && frame.chirp === 0 && Math.abs(model.energy + frame.rate) < 1e-12;
  const [steps] = firstCounts(problem);
  const { tones } = source;
  return { model, start: span.start, end: span.end, steps, peakRabi, time, resonant, frame, tones };
}

const seeds = () => [{ p1: 1 }, { multiphoton: 1 }];
const filteredSeeds = () => [{ m1: 1 }, { m2: 1 }];
const WORK = {
  fast: countPhotons,
  reference: countByReference,
  gradient: (request) => countWithGradient(request, request.filter ? filteredSeeds : seeds)?.result ?? null,
};

for await (const line of createInterface({ input: process.stdin })) {
  const asked = JSON.parse(line);
  const request = requestOf(asked);
  const count = WORK[asked.kernel];
  let result = count(request);
  let calls = 0;
  const began = performance.now();
  let elapsed = 0;
  while (result && elapsed < asked.seconds) {
    result = count(request);
    calls++;
    elapsed = (performance.now() - began) / 1000;
  }
  const answer = result
    ? { elapsed: elapsed / Math.max(1, calls), steps: result.steps, values: result.values }
    : { elapsed: null, steps: 0, values: {} };
  process.stdout.write(`${JSON.stringify({ ...answer, plan: planOf(request) })}\n`);
}
