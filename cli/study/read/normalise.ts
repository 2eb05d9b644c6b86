import { createHash } from 'node:crypto';
import type { Design } from '../../../core/index.js';
import type { FreeParameter, Tie } from '../../../optimizers/index.js';
import type { Study } from '../contract.js';
import { snakeCase } from '../keys/kinds.js';
import type { RawStudy } from './rules.js';

/** Every value present: what a raw study is once no fault was found in it. */
type Complete<T> = T extends undefined
  ? never
  : T extends readonly (infer U)[]
    ? readonly Complete<U>[]
    : T extends object
      ? { readonly [K in keyof T]: Complete<T[K]> }
      : T;

/** The study of a raw one without faults: the defaults that depend on other keys, and the shape that the core takes. */
export function normaliseStudy(
  raw: RawStudy,
  free: { readonly parameters: readonly FreeParameter[]; readonly ties: readonly Tie[] },
  hasBiexciton: boolean,
): Study {
  const { title, emitter, pulse, collection, laser, goal, drift, search } = raw as Complete<RawStudy>;
  const { tuning, ...dot } = emitter;
  const moving = (['area', 'width', 'detuning', 'filterCenter'] as const).some((key) => drift?.[key] !== 0);
  const design: Design = {
    emitter: {
      ...dot,
      biexcitonLifetime: hasBiexciton ? (dot.biexcitonLifetime ?? dot.lifetime / 2) : null,
    },
    pulse,
    collection,
    laser,
    drift: drift !== null && moving ? driftOf(drift) : null,
  };
  const limits = Object.entries(goal.limits).flatMap(([name, limit]) =>
    limit === null ? [] : [{ figure: snakeCase(name), atMost: limit.atMost, atLeast: limit.atLeast }],
  );
  const { parameters, ties } = free;
  return { title, tuning, design, parameters, ties, goal: { ...goal, limits }, search };
}

function driftOf({ judge, quantile, ...rms }: NonNullable<Complete<RawStudy>['drift']>): Design['drift'] {
  return { ...rms, quantile: judge === 'quantile' ? quantile : null };
}

/** SHA-256 (hex) of a study's content; the order of its keys is that of the key table, so it depends on nothing else. */
export function studyHash(study: Study): string {
  const { title, tuning, design, parameters, ties, goal, search } = study;
  const content = JSON.stringify({
    format: 'pulsewright.study/1',
    title,
    tuning,
    design,
    parameters,
    ties,
    goal,
    search,
  });
  return createHash('sha256').update(content).digest('hex');
}
