export { figureDifference, relativeDifference } from './accuracy.js';
export { evaluateMany } from './batch.js';
export { leakedPhotons, piPulseEnergy, pulseFilter } from './collection/leakage.js';
export * from './collection/moments.js';
export { addEmittedCounting, addThinnedCounting } from './counting/emitted.js';
export { addFilteredMoments, type RotatingFilter } from './counting/filtered.js';
export * from './counting/hierarchy.js';
export * from './counting/tail.js';
export * from './design.js';
export { type DriftNode, designAtDrift, driftNodes, normalRule } from './drift/nodes.js';
export type * from './emitter/contract.js';
export { buildGenerator, collectedDipoles, driveOperators, type Generator } from './emitter/generator.js';
export { emitterModel, emitterModels } from './emitter/registry.js';
export {
  type Accuracy,
  checkSupport,
  evaluate,
  PROMISED,
  UnsupportedDesign,
  withExactPhonons,
} from './evaluate.js';
export * from './figures.js';
export { type EvaluateGradient, evaluateGradient, type FigureGradient } from './gradient.js';
export {
  type CountRequest,
  type CountResult,
  countPhotons,
  type Effort,
  PropagationError,
} from './kernels/count.js';
export * from './numerics/index.js';
export { type Bath, correlation, displacement, relaxationShift, spectralDensity } from './phonons/bath.js';
export { type Choice, chooseMethod, type DriveKind } from './phonons/choose.js';
export type { PhononCount, PhononMethod } from './phonons/contract.js';
export { correlationFit, frankCondon, memoryTime, settledFit } from './phonons/correlations.js';
export { countWithPhonons, PhononRangeError } from './phonons/count.js';
export { usualSize } from './phonons/exact.js';
export { type BathFit, methodFit } from './phonons/fits.js';
export { countWithHierarchy, type TowerSize } from './phonons/hierarchy-count.js';
export { phononMethod, phononMethods } from './phonons/registry.js';
export { sidebandTransmission } from './phonons/sideband.js';
export * from './pulse/contract.js';
export * from './pulse/index.js';
export { phononChoice, type Situation, situation } from './situation.js';
export * from './trace.js';
export * from './units/index.js';
