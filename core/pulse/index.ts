export * from './contract.js';
export { DispersionError } from './dispersed.js';
export { createDrive, type Drive, type DriveOptions } from './drive.js';
export { type PolarizedEnergy, pulseEnergy, type SpectralFilter, transmittedEnergy } from './energy.js';
export { pulseFigures } from './figures.js';
export type { ClosedEnvelope, PulseShape } from './shapes/contract.js';
export { pulseShape, pulseShapes } from './shapes/registry.js';
export { dispersionDelay, dispersionPhase, type ToneSpectrum, toneSpectrum } from './spectrum.js';
