import type { CountRequest, CountResult } from '../count.js';
import type { CountWithGradient } from '../gradient.js';

/**
 * A specialised way to answer a count request. It gives the same figures as the reference propagator to the promised
 * accuracy, by its own error estimate, or declines.
 */
export interface FastKernel {
  readonly name: string;
  /** Whether the request has the traits that the kernel is made for; cheap. */
  supports(request: CountRequest): boolean;
  /**
   * The figures, or null where the kernel's rule or its own estimate says that it cannot reach the accuracy.
   * @param countPart counts a part of the request that another kernel or the reference does better
   */
  count(request: CountRequest, countPart: (request: CountRequest) => CountResult): CountResult | null;
  /** The same with exact derivatives; left out by kernels that have none. */
  readonly countWithGradient?: CountWithGradient;
}
