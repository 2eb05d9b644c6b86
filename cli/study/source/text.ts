import type { Fault, Place } from '../contract.js';

/** A study file is a page of text; anything larger is another kind of file. */
export const MAX_STUDY_BYTES = 65_536;

/** The text of a study file, or why it is none. Refuses by size before anything is read. */
export function decodeStudy(bytes: Uint8Array, file: string): { text: string } | { fault: Fault } {
  const at = (line: number, column: number, found: string, wanted: string) => ({
    fault: { file, line, column, path: '', found, wanted },
  });
  if (bytes.length > MAX_STUDY_BYTES) {
    const allowed = `at most ${MAX_STUDY_BYTES} bytes: a study file is a short text`;
    return at(1, 1, `a file of ${bytes.length} bytes`, allowed);
  }
  try {
    return { text: new TextDecoder('utf-8', { fatal: true }).decode(bytes) };
  } catch {
    const offset = validPrefix(bytes);
    const before = new TextDecoder('utf-8').decode(bytes.subarray(0, offset), { stream: true });
    const lastLine = before.slice(before.lastIndexOf('\n') + 1);
    const found =
      offset < bytes.length
        ? `the byte 0x${bytes[offset].toString(16).padStart(2, '0')} at offset ${offset}`
        : 'a file that ends inside a character';
    return at(before.split('\n').length, lastLine.length + 1, found, 'text in UTF-8');
  }
}

/** Length of the longest prefix that is the beginning of UTF-8 text. */
function validPrefix(bytes: Uint8Array): number {
  let good = 0;
  let bad = bytes.length + 1;
  while (bad - good > 1) {
    const middle = (good + bad) >> 1;
    try {
      new TextDecoder('utf-8', { fatal: true }).decode(bytes.subarray(0, middle), { stream: true });
      good = middle;
    } catch {
      bad = middle;
    }
  }
  return good;
}

/** Deepest nesting of brackets, and longest run of indentation and list marks, that a study can need. */
const DEEPEST = 32;
const LONGEST_LEAD = 128;

/**
 * A fault where brackets or indentation nest beyond any study. Run before the YAML parser, which recurses: a file of
 * 100,000 brackets ends the process there, not in an exception.
 */
export function nestingFault(text: string, file: string): Fault | null {
  const refuse = (place: Omit<Place, 'file'>): Fault => ({
    file,
    ...place,
    path: '',
    found: 'nesting too deep to be a study',
    wanted: `at most ${DEEPEST} levels`,
  });
  let depth = 0;
  const lines = text.split('\n');
  for (let i = 0; i < lines.length; i++) {
    const lead = /^[\s?:-]*/.exec(lines[i]) as RegExpExecArray;
    if (lead[0].length > LONGEST_LEAD && lead[0].length < lines[i].length) {
      return refuse({ line: i + 1, column: LONGEST_LEAD + 1 });
    }
    const code = lines[i].replace(/(^|\s)#.*$/, '$1');
    for (let j = 0; j < code.length; j++) {
      const c = code[j];
      if (c === '[' || c === '{') depth++;
      else if (c === ']' || c === '}') depth = Math.max(0, depth - 1);
      if (depth > DEEPEST) return refuse({ line: i + 1, column: j + 1 });
    }
  }
  return null;
}
