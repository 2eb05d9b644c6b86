import type { PhononSpec } from '../design.js';
import { type CountRequest, countPhotons } from '../kernels/count.js';
import type { Drive } from '../pulse/drive.js';
import { chooseMethod, type DriveKind } from './choose.js';
import type { PhononCount } from './contract.js';
import { countWithPhonons } from './count.js';

/** How one design is counted: by which method, and what to say of the choice. */
export interface PhononPlan {
  readonly method: 'none' | 'polaron' | 'weak-coupling' | 'exact';
  /** Why this method. */
  readonly remarks: readonly string[];
  count(request: CountRequest): PhononCount;
}

/** @param quoted for `exact`: raise terms and depth until every figure settles */
export function phononPlan(
  phonons: PhononSpec | null,
  drive: Drive,
  kind: DriveKind,
  quoted: boolean,
): PhononPlan {
  if (!phonons || phonons.coupling === 0) {
    return {
      method: 'none',
      remarks: [],
      count: (request) => ({ ...countPhotons(request), flags: [], remarks: [], error: 0 }),
    };
  }
  const choice = phonons.method === 'auto' ? chooseMethod(drive, phonons, kind) : null;
  const method = choice ? choice.method : (phonons.method as PhononPlan['method'] & PhononSpec['method']);
  return {
    method,
    remarks: choice ? [choice.reason] : [],
    count: (request) => countWithPhonons(request, phonons, method, quoted),
  };
}
