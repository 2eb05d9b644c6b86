import { describe, expect, it } from 'vitest';
import {
  DispersionError,
  PhononRangeError,
  PropagationError,
  UnsupportedDesign,
} from '../../../core/index.js';
import { errorOf, failureOf } from '../../../optimizers/workers/failure.js';

describe('errors between threads', () => {
  it.each([PropagationError, UnsupportedDesign, PhononRangeError, DispersionError])(
    'keep class, name and words: %o',
    (Kind) => {
      const error = new Kind('a shorter pulse helps');
      const again = errorOf(structuredClone(failureOf(error)), 'task 3');
      expect(again).toBeInstanceOf(Kind);
      expect(again.name).toBe(error.name);
      expect(again.message).toBe('a shorter pulse helps');
      expect(again.stack).toBe(error.stack);
    },
  );

  it('say where any other one came from', () => {
    const again = errorOf(failureOf(new TypeError('x is undefined')), 'task 3');
    expect(again.message).toBe('task 3: x is undefined');
    expect(errorOf(failureOf('thrown text'), 'task 3').message).toBe('task 3: thrown text');
  });
});
