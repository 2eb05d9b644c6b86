import type { Tone } from '../contract.js';

/** The continuous parameters of a tone, in the order of their slots. */
export const TONE_KEYS = [
  'fwhm',
  'area',
  'detuning',
  'delay',
  'phase',
  'polarization',
  'gdd',
  'tod',
] as const satisfies readonly (keyof Tone)[];

export type ToneKey = (typeof TONE_KEYS)[number];

/** Slots of a tone's parameters in a vector of derivatives; tone k begins at k·TONE_SLOTS. In the units of `Tone`. */
export const TONE_SLOTS = TONE_KEYS.length;
export const FWHM = 0;
export const AREA = 1;
export const DETUNING = 2;
export const DELAY = 3;
export const PHASE = 4;
export const POLARIZATION = 5;
export const GDD = 6;
export const TOD = 7;

/** Slot of the filter's width (by κ, 1/ps) after all tones; its centre (1/ps) is the next one. */
export const kappaSlot = (tones: number): number => TONE_SLOTS * tones;
export const centerSlot = (tones: number): number => TONE_SLOTS * tones + 1;

/** A vector of derivatives of one scalar by all parameters of a design's tones and filter. */
export const emptyDerivatives = (tones: number): Float64Array => new Float64Array(TONE_SLOTS * tones + 2);
