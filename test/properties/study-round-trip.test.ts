import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { formatFault, readStudy, type Study, type Tuning, writeStudyFile } from '../../cli/study/index.js';
import type { Design } from '../../core/index.js';

const finite = fc.double({ noNaN: true, min: -1e9, max: 1e9 }).map((x) => x + 0);
const tiny = fc.double({ noNaN: true, min: -1e-9, max: 1e-9 }).map((x) => x + 0);
const number = fc.oneof(finite, tiny, fc.integer({ min: -50, max: 50 }));
const positive = fc.double({ noNaN: true, min: 1e-9, max: 1e9 });
const zeroUp = fc.oneof(fc.constant(0), positive);
const share = fc.double({ noNaN: true, min: 1e-9, max: 1 });
const nullable = <T>(arbitrary: fc.Arbitrary<T>) => fc.option(arbitrary, { nil: null });

const tone = fc.record({
  shape: fc.constantFrom('gaussian', 'sech', 'square'),
  fwhm: positive,
  area: zeroUp,
  detuning: number,
  gdd: number,
  tod: number,
  delay: number,
  phase: number,
  polarization: number,
});

const emitter = (cascade: boolean) =>
  fc.record({
    model: fc.constant(cascade ? 'cascade' : 'two-level'),
    wavelength: positive,
    lifetime: positive,
    biexcitonLifetime: cascade ? positive : fc.constant(null),
    binding: cascade ? number.filter((x) => x !== 0) : fc.constant(null),
    splitting: cascade ? number : fc.constant(0),
    dephasing: zeroUp,
    phonons: nullable(
      fc.record({
        coupling: zeroUp,
        cutoff: positive,
        temperature: zeroUp,
        method: fc.constantFrom('auto', 'polaron', 'weak-coupling', 'exact'),
      }),
    ),
  });

const design: fc.Arbitrary<Design> = fc.boolean().chain((cascade) =>
  fc.record({
    emitter: emitter(cascade),
    pulse: fc.record({
      reference: fc.constantFrom(
        ...(cascade ? (['exciton', 'two-photon'] as const) : (['exciton'] as const)),
      ),
      tones: fc.array(tone, { minLength: 1, maxLength: 4 }),
    }),
    collection: fc.record({
      line: fc.constantFrom(...(cascade ? (['exciton', 'biexciton'] as const) : (['exciton'] as const))),
      polarization: fc.constantFrom(
        ...(cascade ? (['all', 'crossed', 'h', 'v'] as const) : (['all', 'crossed'] as const)),
      ),
      efficiency: share,
      filter: nullable(fc.record({ fwhm: positive, center: number })),
    }),
    laser: nullable(
      fc.record({
        repetition: nullable(positive),
        piPulse: fc.record({ energy: positive, fwhm: positive }),
        rejection: fc.oneof(fc.constant(0), share),
      }),
    ),
    drift: nullable(
      fc.record({
        area: positive,
        width: fc.double({ noNaN: true, min: 0, max: 0.15 }),
        detuning: zeroUp,
        filterCenter: zeroUp,
        quantile: nullable(fc.double({ noNaN: true, min: 0.5, max: 0.999 })),
      }),
    ),
  }),
) as fc.Arbitrary<Design>;

/** A plateau with the nominal bias and the first tone's detuning on it. */
const tuningFor = ({ pulse }: Design): fc.Arbitrary<Tuning | null> =>
  nullable(
    fc
      .record({
        slope: fc.double({ noNaN: true, min: 1e-3, max: 1e3 }).chain((x) => fc.constantFrom(x, -x)),
        bias: fc.double({ noNaN: true, min: -1e3, max: 1e3 }).map((x) => x + 0),
        below: positive,
        above: positive,
      })
      .map(({ slope, bias, below, above }) => {
        const reach = 2 * Math.abs(pulse.tones[0].detuning / slope) + 1;
        return { slope, bias, range: { from: bias - reach - below, to: bias + reach + above } };
      }),
  );

const studyWith = (tuning: (design: Design) => fc.Arbitrary<Tuning | null>): fc.Arbitrary<Study> =>
  design.chain((d) => fc.record({ ...parts, design: fc.constant(d), tuning: tuning(d) }));

const parts = {
  title: fc.string({ unit: 'grapheme', maxLength: 40 }).filter((t) => t.length <= 200 && !/\p{Cc}/u.test(t)),
  parameters: fc.constant([]),
  ties: fc.constant([]),
  goal: fc.record({
    impurity: fc.constantFrom('multiphoton', 'g2'),
    brightness: fc.constant('mean' as const),
    atLeast: nullable(positive),
    front: fc.record({
      from: nullable(share),
      to: nullable(positive.map((x) => x + 1)),
      points: fc.integer({ min: 2, max: 1000 }),
    }),
    third: nullable(
      fc.record({ axis: fc.constant('mean' as const), slices: fc.integer({ min: 2, max: 6 }) }),
    ),
    limits: nullable(positive).map((atMost) =>
      atMost === null ? [] : [{ figure: 'pulse.duration_ps', atMost, atLeast: null }],
    ),
  }),
  search: fc.record({
    evaluations: fc.integer({ min: 1, max: 1e9 }),
    seed: fc.integer({ min: 1, max: Number.MAX_SAFE_INTEGER }),
    method: fc.constantFrom('auto', 'nsga2'),
  }),
};
const study = studyWith(tuningFor);

describe('writing and reading a study', () => {
  it('gives the same numbers bit for bit', () => {
    fc.assert(
      fc.property(study, (original) => {
        const text = writeStudyFile(original, original.design, original.title);
        const back = readStudy(new TextEncoder().encode(text), 'design.yaml');
        if (back.kind === 'faults') throw new Error(`${back.faults.map(formatFault).join('\n')}\n${text}`);
        // Numbers are compared by Object.is; the clone gives the generated records the prototype of plain objects.
        expect(back.study).toStrictEqual(structuredClone(original));
      }),
      { seed: 21, numRuns: 300 },
    );
  });
});
