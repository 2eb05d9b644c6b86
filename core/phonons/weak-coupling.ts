import { relaxationShift } from './bath.js';
import type { PhononMethod } from './contract.js';
import { memoryTime, settledFit } from './correlations.js';
import { withRelaxationEnergy } from './counting.js';
import type { SecondOrderModel } from './model.js';
import { FIT_ERROR, MOST_TERMS, secondOrderCount } from './second-order-count.js';

/**
 * Second-order time-convolutionless master equation with the drive inside the memory (Breuer & Petruccione, The Theory
 * of Open Quantum Systems, section 9.2; for driven dots Machnikowski & Jacak, Phys. Rev. B 69, 193302 (2004)):
 * X = S, f = C(t), levels raised by the relaxation energy.
 */
export const weakCoupling: PhononMethod = {
  name: 'weak-coupling',
  summary: 'second order in the coupling; for drives much faster than the bath',
  secondOrder: true,
  count(request, bath) {
    const { scheme } = request;
    const n = scheme.levels.length;
    const model: SecondOrderModel = {
      scheme: withRelaxationEnergy(scheme, relaxationShift(bath)),
      driveFactor: 1,
      fitSensitivity: 1000,
      afterglow: memoryTime(bath, 'bath', 1e-5),
      baths: [
        {
          fit: settledFit(bath, 'bath', FIT_ERROR, MOST_TERMS),
          operator(_, out) {
            out.fill(0);
            scheme.levels.forEach((l, i) => {
              out[2 * (i * n + i)] = l.excitons;
            });
          },
        },
      ],
    };
    return secondOrderCount(request, bath, model);
  },
};
