export * from './contract.js';
export { leafAt } from './keys/paths.js';
export { studyHash } from './read/normalise.js';
export { MAX_STUDY_BYTES } from './source/text.js';
export { readStudy } from './study.js';
