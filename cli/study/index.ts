export * from './contract.js';
export { fullPath, keyEntries, leafAt } from './keys/paths.js';
export { studyHash } from './read/normalise.js';
export { MAX_STUDY_BYTES } from './source/text.js';
export { readStudy } from './study.js';
export { biasOf, plateauDetunings } from './tuning.js';
export { writeDesign, writeStudyFile } from './write/design.js';
export { keyTable } from './write/key-table.js';
export { jsonSchema } from './write/schema.js';
