export * from './problem/contract.js';
