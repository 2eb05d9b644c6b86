export { FFT_LIMIT, FourierPlan, powerOfTwo } from './fft.js';
export { gaussHermite, type NormalRule } from './hermite.js';
export { integrate, type QuadratureOptions, type QuadratureResult } from './quadrature.js';
export { type Stream, stream } from './stream.js';
export { interpolationError, interpolationStep, STENCIL, UniformTable } from './table.js';
