import { collectedDipoles } from '../../../core/emitter/generator.js';
import type { Design, Tone } from '../../../core/index.js';
import {
  type CountRequest,
  type CountResult,
  countByReference,
  countPhotons,
  PropagationError,
} from '../../../core/kernels/count.js';
import { disagreement } from '../../../core/kernels/fast/estimate.js';
import { fastKernels } from '../../../core/kernels/fast/registry.js';
import { type Stream, stream } from '../../../core/numerics/stream.js';
import { situation } from '../../../core/situation.js';
import { RAD_PER_PS_PER_GHZ } from '../../../core/units/constants.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../../support.js';

const between = (s: Stream, low: number, high: number): number => low + (high - low) * s.next();
const logarithmic = (s: Stream, low: number, high: number): number => low * (high / low) ** s.next();
const pick = <T>(s: Stream, list: readonly T[]): T => list[s.int(list.length)];

function randomTone(s: Stream): Tone {
  return tone({
    shape: pick(s, ['gaussian', 'gaussian', 'gaussian', 'gaussian', 'sech', 'square']),
    fwhm: logarithmic(s, 0.5, 200),
    area: Math.PI * (s.next() < 0.5 ? between(s, 0, 4) : between(s, 0, 40)),
    detuning: s.next() < 0.4 ? 0 : s.next() < 0.5 ? between(s, -2, 2) : between(s, -25, 25),
    phase: s.next() < 0.5 ? 0 : between(s, -Math.PI, Math.PI),
    polarization: s.next() < 0.5 ? 0 : between(s, -Math.PI, Math.PI),
  });
}

/** One of a seeded set of designs spread over the valid range: areas to 40π, 0.5–200 ps, ±25 meV, GDD ±500 ps², lifetimes 50 ps–2 ns. */
export function randomDesign(
  seed: number,
  index: number,
  model: 'two-level' | 'cascade',
  filtered: boolean,
): Design {
  const s = stream(seed, index);
  const lifetime = logarithmic(s, 50, 2000);
  const dephasing = s.next() < 0.6 ? 0 : logarithmic(s, 1e-5, 0.02);
  const emitter =
    model === 'two-level'
      ? twoLevelEmitter({ lifetime, dephasing })
      : cascadeEmitter({
          lifetime,
          dephasing,
          biexcitonLifetime: lifetime * between(s, 0.3, 1),
          binding: between(s, 0.5, 6) * (s.next() < 0.7 ? 1 : -1),
          splitting: s.next() < 0.5 ? 0 : between(s, -0.03, 0.03),
        });
  const tones = [randomTone(s)];
  if (s.next() < 0.4) tones.push({ ...randomTone(s), delay: s.next() < 0.5 ? 0 : between(s, -60, 60) });
  // A chirp as large as this spreads a short pulse over nanoseconds: keep to what a stretcher would make of it.
  const chirped = tones.map((t) =>
    s.next() < 0.6 ? t : { ...t, gdd: between(s, -1, 1) * Math.min(500, 30 * t.fwhm ** 2) },
  );
  const center = s.next() < 0.6 ? 0 : between(s, -20, 20);
  const filter = filtered ? { fwhm: logarithmic(s, 1, 1000), center } : null;
  const polarization = model === 'cascade' ? pick(s, ['all', 'h', 'crossed', 'v'] as const) : 'all';
  const line = model === 'cascade' && s.next() < 0.3 ? 'biexciton' : 'exciton';
  return design(emitter, chirped, {
    collection: { line, polarization, efficiency: 1, filter },
    pulse: { reference: model === 'cascade' && s.next() < 0.5 ? 'two-photon' : 'exciton', tones: chirped },
  });
}

/** The request that `evaluate` would make of a design, with thinning in the emitted basis. */
export function requestOf(d: Design, tolerance = 1e-10, parts = 1): CountRequest {
  const { scheme, drive, frame, line } = situation(d);
  const { polarization, filter } = d.collection;
  const axis =
    polarization === 'all'
      ? 'all'
      : polarization === 'h'
        ? 0
        : polarization === 'v'
          ? Math.PI / 2
          : d.pulse.tones[0].polarization + Math.PI / 2;
  return {
    scheme,
    dipoles: collectedDipoles(scheme, d.collection.line, axis),
    drive,
    frame,
    shift: 0.003,
    thinning: filter ? null : 0.6,
    filter: filter && {
      kappa: filter.fwhm * RAD_PER_PS_PER_GHZ,
      center: line + filter.center * RAD_PER_PS_PER_GHZ - frame,
      order: 4,
    },
    effort: { tolerance, parts, nodes: 1, series: 'bound' },
  };
}

/** Largest difference of two results in units of the promise (1e-9 on p_0 and p_1, 1e-6 relative on the rest). */
export function inPromises(a: CountResult, b: CountResult): number {
  const populations = Math.max(...a.populations.map((p, i) => Math.abs(p - b.populations[i])));
  return Math.max(disagreement(a.values, b.values), 0.1 * populations) / 1e-9;
}

export interface Agreement {
  /** Designs that a fast kernel answered, that it left to the reference, and that were not compared. */
  readonly fast: number;
  readonly declined: number;
  readonly skipped: number;
  /** Largest error in units of the promise. */
  readonly worst: number;
  /** Command-like descriptions of designs whose error exceeds the promise. */
  readonly wrong: readonly string[];
}

/**
 * Compares the fast kernels with the reference at a hundredth of the usual tolerance. Where they differ the reference is
 * refined twice more, so that its own error is not taken for theirs.
 * @param limits `most`: designs for which a kernel needs more steps are skipped (short test)
 */
export function agreement(
  model: 'two-level' | 'cascade',
  filtered: boolean,
  count: number,
  seed: number,
  limits: { readonly most?: number },
): Agreement {
  const wrong: string[] = [];
  let [fast, declined, skipped, worst] = [0, 0, 0, 0];
  for (let index = 0; index < count; index++) {
    const d = randomDesign(seed, index, model, filtered);
    const most = limits.most ?? Number.POSITIVE_INFINITY;
    if (effortOf(d) > most) {
      skipped++;
      continue;
    }
    const request = requestOf(d);
    const found = fastKernels.find((k) => k.supports(request))?.count(request, countPhotons);
    if (!found) {
      declined++;
      continue;
    }
    fast++;
    const error = errorOf(found, request);
    if (error === null) skipped++;
    else {
      // An error that the kernel owns up to is no broken promise.
      if (found.localErrors <= 1e-9) worst = Math.max(worst, error);
      if (error > Math.max(1, found.localErrors / 1e-9))
        wrong.push(`seed ${seed}, index ${index}: ${error.toFixed(2)} times the promise`);
    }
  }
  return { fast, declined, skipped, worst, wrong };
}

function errorOf(found: CountResult, request: CountRequest): number | null {
  const effort = (tolerance: number, parts: number) => ({ ...request.effort, tolerance, parts });
  try {
    let error = Number.POSITIVE_INFINITY;
    for (const parts of [1, 2, 4]) {
      const truth = countByReference({ ...request, effort: effort(1e-12, parts) });
      error = inPromises(found, sameFigures(truth, found));
      if (error < 0.5) break;
    }
    return error;
  } catch (cause) {
    if (cause instanceof PropagationError) return null;
    throw cause;
  }
}

const sameFigures = (all: CountResult, like: CountResult): CountResult => ({
  ...all,
  values: Object.fromEntries(Object.keys(like.values).map((name) => [name, all.values[name]])),
});

/** Turns of the drive over the pulse: what a comparison costs, roughly. */
function effortOf(d: Design): number {
  const { drive } = requestOf(d);
  const window = drive.breakpoints[drive.breakpoints.length - 1] - drive.breakpoints[0];
  return window * (drive.scales.peakRabi + drive.scales.frequency + 1 / drive.scales.time);
}
