import type { CountRequest } from '../kernels/count.js';
import type { Bath } from './bath.js';
import type { PhononCount } from './contract.js';
import { frankCondon, memoryTime } from './correlations.js';
import type { SecondOrderModel } from './model.js';
import { countSecondOrder } from './second-order.js';
import { sidebandTransmission } from './sideband.js';

/** Wanted error of a correlation's fit and the most exponentials it may take (conjugate ones counted apart). */
export const FIT_ERROR = 1e-9;
export const MOST_TERMS = 16;

/** Fit error from which the reader is told. */
const COARSE_FIT = 1e-8;
/** Runs a second-order model with the light split into zero-phonon line and sideband, and says what to know of it. */
export function secondOrderCount(request: CountRequest, bath: Bath, model: SecondOrderModel): PhononCount {
  const { filter, frame } = request;
  const amplitude = frankCondon(bath);
  const sideband = filter
    ? sidebandTransmission(bath, filter.kappa, filter.center - lineCenter(request) + frame)
    : 0;
  const result = countSecondOrder(
    request,
    model,
    { amplitude: filter ? amplitude : 1, sideband },
    { time: 1 / bath.cutoff, settling: memoryTime(bath, 'bath', 1e-5) },
  );
  const fitted = Math.max(...model.baths.map((b) => b.fit.error));
  const remarks =
    fitted > COARSE_FIT
      ? [
          `bath correlation fitted to ${fitted.toExponential(1)} only: its memory is long at so low a temperature`,
        ]
      : [];
  return { ...result, flags: [], remarks, error: model.fitSensitivity * fitted };
}

/** Mean transition frequency of the collected dipoles relative to the nominal mean exciton line, 1/ps. */
function lineCenter(request: CountRequest): number {
  const { scheme, dipoles, shift } = request;
  let sum = 0;
  let weight = 0;
  for (const c of dipoles) {
    for (let to = 0; to < c.n; to++) {
      for (let from = 0; from < c.n; from++) {
        const w = c.re[to * c.n + from] ** 2;
        sum += w * (scheme.levels[from].offset - scheme.levels[to].offset + shift);
        weight += w;
      }
    }
  }
  return weight > 0 ? sum / weight : 0;
}
