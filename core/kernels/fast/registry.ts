import type { FastKernel } from './contract.js';
import { levels } from './levels/kernel.js';
import { twoLevelEmitted } from './two-level-emitted.js';
import { twoLevelFiltered } from './two-level-filtered/kernel.js';

/** Every fast kernel, in the order in which a request is offered to them. */
export const fastKernels: readonly FastKernel[] = [twoLevelEmitted, twoLevelFiltered, levels];
