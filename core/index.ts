export { figureDifference } from './accuracy.js';
export { leakedPhotons, piPulseEnergy, pulseFilter } from './collection/leakage.js';
export * from './collection/moments.js';
export { addEmittedCounting, addThinnedCounting } from './counting/emitted.js';
export { addFilteredMoments, type RotatingFilter } from './counting/filtered.js';
export * from './counting/hierarchy.js';
export * from './counting/tail.js';
export * from './design.js';
export { type DriftNode, driftNodes, normalRule } from './drift/nodes.js';
export type * from './emitter/contract.js';
export { buildGenerator, collectedDipoles, driveOperators, type Generator } from './emitter/generator.js';
export { emitterModel, emitterModels } from './emitter/registry.js';
export { type Accuracy, evaluate, PROMISED, UnsupportedDesign } from './evaluate.js';
export * from './figures.js';
export {
  type CountRequest,
  type CountResult,
  countPhotons,
  type Effort,
  PropagationError,
} from './kernels/count.js';
export * from './numerics/index.js';
export * from './pulse/contract.js';
export * from './pulse/index.js';
export { type Situation, situation } from './sample.js';
export * from './trace.js';
export * from './units/index.js';
