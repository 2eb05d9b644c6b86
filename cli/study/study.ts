import { emitterModels } from '../../core/index.js';
import type { Fault, Override, Place, StudyResult } from './contract.js';
import { studyKeys } from './keys/table.js';
import { ReadContext } from './read/context.js';
import { normaliseStudy, studyHash } from './read/normalise.js';
import { applyOverrides, OVERRIDE_FILE } from './read/overrides.js';
import { keepOnPlateau } from './read/plateau.js';
import { addRemarks } from './read/remarks.js';
import { checkRules } from './read/rules.js';
import { readSection } from './read/section.js';
import { resolveFields } from './read/ties.js';
import { readDocument } from './source/document.js';
import type { Placed } from './source/placed.js';
import { decodeStudy } from './source/text.js';

/**
 * Reads a study file: every fault at its place, all at once, or the complete study in internal units. `overrides` are
 * put in before anything is checked. Never throws for what a file or an override can hold.
 */
export function readStudy(
  bytes: Uint8Array,
  fileName: string,
  overrides: readonly Override[] = [],
): StudyResult {
  const decoded = decodeStudy(bytes, fileName);
  if ('fault' in decoded) return { kind: 'faults', faults: [decoded.fault] };
  const document = readDocument(decoded.text, fileName);
  if (document.root === null) return { kind: 'faults', faults: document.faults };
  const faults = [...document.faults, ...applyOverrides(document.root, overrides)];
  return readTree(document.root, faults);
}

function readTree(root: Placed, earlier: readonly Fault[]): StudyResult {
  const context = new ReadContext(root);
  const raw = readSection(studyKeys, root, root.at, '', context);
  if (raw) keepOnPlateau(raw, context);
  const free = resolveFields(context);
  if (raw) checkRules(raw, context);
  // What could not be read has its fault already.
  const later = context.faults.filter((f) => !earlier.some((e) => e.path === f.path && byPlace(e, f) === 0));
  const faults = [...earlier, ...later];
  if (!raw || faults.length > 0) return { kind: 'faults', faults: faults.sort(byPlace) };
  const model = emitterModels.find(({ name }) => name === raw.emitter?.model);
  const study = normaliseStudy(raw, free, model?.hasBiexciton ?? false);
  addRemarks(study, context);
  return { kind: 'study', study, remarks: context.remarks.sort(byPlace), hash: studyHash(study) };
}

/** Overrides after the file, each in the order of its text. */
function byPlace(a: Place, b: Place): number {
  const overridden = Number(a.file === OVERRIDE_FILE) - Number(b.file === OVERRIDE_FILE);
  return overridden || a.line - b.line || a.column - b.column;
}
