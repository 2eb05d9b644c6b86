/**
 * Times the built package's counting in a bare Node process: a TypeScript loader rewrites what it loads, which costs half
 * the speed of the kernels. One JSON request a line, { design, order, kernel: 'fast' | 'reference', seconds }; answers
 * { elapsed, steps, values, plan } a line.
 */
import { performance } from 'node:perf_hooks';
import { createInterface } from 'node:readline';
import { collectedDipoles } from '../../dist/core/emitter/generator.js';
import { countByReference, countPhotons } from '../../dist/core/kernels/count.js';
import { smoothSpans } from '../../dist/core/kernels/fast/spans.js';
import { firstSteps } from '../../dist/core/kernels/fast/step-rule.js';
import { asTwoLevel } from '../../dist/core/kernels/fast/two-level.js';
import { situation } from '../../dist/core/sample.js';
import { RAD_PER_PS_PER_GHZ } from '../../dist/core/units/constants.js';

function requestOf({ design, order, tolerance }) {
  const { scheme, drive, frame, line } = situation(design);
  const { filter, polarization } = design.collection;
  const dipoles = collectedDipoles(scheme, 'exciton', polarization === 'h' ? 0 : 'all');
  const center = filter && line + filter.center * RAD_PER_PS_PER_GHZ - frame;
  return {
    scheme,
    dipoles,
    drive,
    frame,
    shift: 0,
    thinning: null,
    filter: filter && { kappa: filter.fwhm * RAD_PER_PS_PER_GHZ, center, order },
    effort: { tolerance, parts: 1, nodes: 1, series: 'estimate' },
  };
}

/** What a peer in another language needs to start from the same point; null for other traits. */
function planOf(request) {
  const model = request.filter ? null : asTwoLevel(request);
  const spans = smoothSpans(request.drive);
  if (!model || !spans) return null;
  const { counts, follow } = firstSteps(request.drive, model, spans);
  const { breakpoints } = request.drive;
  return {
    model,
    frame: request.frame,
    start: breakpoints[0],
    end: breakpoints[breakpoints.length - 1],
    steps: counts.reduce((a, b) => a + b, 0),
    follow,
  };
}

for await (const line of createInterface({ input: process.stdin })) {
  const asked = JSON.parse(line);
  const request = requestOf(asked);
  const count = asked.kernel === 'fast' ? countPhotons : countByReference;
  let result = count(request);
  let calls = 0;
  const began = performance.now();
  let elapsed = 0;
  while (elapsed < asked.seconds) {
    result = count(request);
    calls++;
    elapsed = (performance.now() - began) / 1000;
  }
  const answer = { elapsed: elapsed / Math.max(1, calls), steps: result.steps, values: result.values };
  process.stdout.write(`${JSON.stringify({ ...answer, plan: planOf(request) })}\n`);
}
