import { cascade } from './cascade.js';
import type { EmitterModel } from './contract.js';
import { twoLevel } from './two-level.js';

/** Every emitter that a study can name. To add one: a file beside these and a line here. */
export const emitterModels: readonly EmitterModel[] = [twoLevel, cascade];

/** The model of that name; throws an error that names the known ones. */
export function emitterModel(name: string): EmitterModel {
  const found = emitterModels.find((model) => model.name === name);
  if (!found) {
    throw new Error(`unknown emitter model ${name}; known: ${emitterModels.map((m) => m.name).join(', ')}`);
  }
  return found;
}
