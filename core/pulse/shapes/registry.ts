import type { PulseShape } from './contract.js';
import { gaussian } from './gaussian.js';
import { sech } from './sech.js';
import { square } from './square.js';

/** Every pulse shape a study can name, in the order in which help shows them. */
export const pulseShapes: Readonly<Record<string, PulseShape>> = { gaussian, sech, square };

/** The shape of that name; an unknown name is an input error that lists the known ones. */
export function pulseShape(name: string): PulseShape {
  if (!Object.hasOwn(pulseShapes, name)) {
    throw new RangeError(`pulse shape: got ${name}; known are ${Object.keys(pulseShapes).join(', ')}`);
  }
  return pulseShapes[name];
}
