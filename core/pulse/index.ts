export * from './contract.js';
export { createDrive, type Drive, type DriveOptions } from './drive.js';
export type { ClosedEnvelope, PulseShape } from './shapes/contract.js';
export { pulseShape, pulseShapes } from './shapes/registry.js';
