import type { PhononMethod } from './contract.js';
import { exact } from './exact.js';
import { polaron } from './polaron.js';
import { weakCoupling } from './weak-coupling.js';

/** Every phonon method that a study can name. To add one: a file beside these and a line here. */
export const phononMethods: readonly PhononMethod[] = [polaron, weakCoupling, exact];

/** The method of that name; throws an error that names the known ones. */
export function phononMethod(name: string): PhononMethod {
  const found = phononMethods.find((method) => method.name === name);
  if (!found) {
    throw new Error(
      `unknown phonon method ${name}; known: auto, ${phononMethods.map((m) => m.name).join(', ')}`,
    );
  }
  return found;
}
