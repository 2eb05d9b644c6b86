import type { Design } from '../design.js';
import { emitterModel } from '../emitter/registry.js';
import { centerSlot, kappaSlot, TONE_KEYS, TONE_SLOTS, type ToneKey } from '../pulse/derivatives/layout.js';
import { RAD_PER_PS_PER_GHZ } from '../units/constants.js';

/** Where a design's parameter stands in a vector of derivatives, and how its unit compares with the slot's. */
export interface ParameterSlot {
  readonly slot: number;
  readonly factor: number;
}

/** The slot of a parameter by its path in the design; null for one without exact derivatives. */
export function parameterSlot(design: Design, path: string): ParameterSlot | null {
  const tones = design.pulse.tones.length;
  if (design.collection.filter && path === 'collection.filter.fwhm')
    return { slot: kappaSlot(tones), factor: RAD_PER_PS_PER_GHZ };
  if (design.collection.filter && path === 'collection.filter.center')
    return { slot: centerSlot(tones), factor: RAD_PER_PS_PER_GHZ };
  const [, index, key] = /^pulse\.tones\.(\d+)\.(\w+)$/.exec(path) ?? [];
  const place = TONE_KEYS.indexOf(key as ToneKey);
  if (place < 0 || Number(index) >= tones) return null;
  if (turnsDipole(design) && Number(index) === 0 && key === 'polarization') return null;
  return { slot: TONE_SLOTS * Number(index) + place, factor: 1 };
}

/** An analyser crossed to the first tone selects the collected dipole of an emitter with polarised lines. */
const turnsDipole = ({ collection, emitter }: Design): boolean =>
  collection.polarization === 'crossed' &&
  emitterModel(emitter.model).scheme(emitter).projection === 'linear';
