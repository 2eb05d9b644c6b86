export { FFT_LIMIT, FourierPlan, powerOfTwo } from './fft.js';
export { gaussHermite, type NormalRule } from './hermite.js';
export {
  type Interval,
  integrate,
  overPieces,
  type QuadratureOptions,
  type QuadratureResult,
} from './quadrature.js';
export { type Stream, stream } from './stream.js';
export { interpolationError, interpolationStep, STENCIL, UniformTable } from './table.js';
