export * from './design.js';
export * from './figures.js';
export * from './pulse/contract.js';
export * from './units/constants.js';
