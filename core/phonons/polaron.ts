import type { PhononMethod } from './contract.js';
import { frankCondon, settledFit } from './correlations.js';
import { addDrive, raisingEntries, type SecondOrderModel } from './model.js';
import { FIT_ERROR, MOST_TERMS, secondOrderCount } from './second-order-count.js';

/**
 * Second-order master equation after the polaron transformation (McCutcheon & Nazir, New J. Phys. 12, 113042 (2010)):
 * drive ⟨B⟩Ω, two baths ⟨B⟩²(cosh φ − 1) and ⟨B⟩² sinh φ that couple through X_g = ½(ΩA† + Ω*A) and
 * X_u = ½(iΩA† − iΩ*A).
 */
export const polaron: PhononMethod = {
  name: 'polaron',
  summary: 'second order after displacing the bath; for drives slower than the bath',
  secondOrder: true,
  count(request, bath) {
    const { scheme } = request;
    const n = scheme.levels.length;
    const entries = raisingEntries(scheme);
    const factor = frankCondon(bath);
    const operator =
      (re: number, im: number) =>
      (drive: Float64Array, out: Float64Array): void => {
        out.fill(0);
        addDrive(n, entries, drive, re / factor, im / factor, out);
      };
    const model: SecondOrderModel = {
      scheme,
      driveFactor: factor,
      fitSensitivity: 60,
      // Both X vanish with the drive: nothing acts on the emitter after it.
      afterglow: 0,
      baths: [
        { fit: settledFit(bath, 'even', FIT_ERROR, MOST_TERMS), operator: operator(0.5, 0) },
        { fit: settledFit(bath, 'odd', FIT_ERROR, MOST_TERMS), operator: operator(0, 0.5) },
      ],
    };
    return secondOrderCount(request, bath, model);
  },
};
