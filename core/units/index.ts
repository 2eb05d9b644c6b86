export * from './constants.js';
export * from './convert.js';
export * from './dimensions.js';
export * from './format.js';
export * from './parse.js';
