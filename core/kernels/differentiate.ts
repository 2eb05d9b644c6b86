import { fastKernels } from './fast/registry.js';
import type { CountWithGradient } from './gradient.js';

/** Counts photons with derivatives by the first fast kernel that has them for the request; null where none has. */
export const countWithGradient: CountWithGradient = (request, seeds) => {
  if (request.effort.kernel === 'reference') return null;
  for (const kernel of fastKernels) {
    const result = kernel.supports(request) ? (kernel.countWithGradient?.(request, seeds) ?? null) : null;
    if (result) return result;
  }
  return null;
};
