export * from './problem/contract.js';
export * from './problem/judge.js';
export * from './problem/path.js';
export * from './problem/problem.js';
export * from './problem/space.js';
export * from './search.js';
export * from './tasks/contract.js';
