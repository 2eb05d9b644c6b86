import {
  type Design,
  emitterModel,
  GHZ_PER_MEV,
  HBAR,
  pulseFigures,
  type Tone,
} from '../../../core/index.js';

const EXCITON = 'exciton line';

/** Tones of less area than this, rad, do nothing worth a name. */
const NEGLIGIBLE = 0.02 * Math.PI;
/** A tone is resonant within this share of its bandwidth (spectral intensity FWHM) about the resonance. */
const RESONANT = 0.5;
/** Tones are of one colour within this share of the wider bandwidth. */
const ONE_COLOUR = 0.25;
/** A pulse is chirped when dispersion makes it this many times longer. */
const STRETCHED = 1.1;

const bandwidthOf = (design: Design, tone: Tone): number =>
  pulseFigures({ ...design.pulse, tones: [tone] }).bandwidth_ghz / GHZ_PER_MEV;

function chirpOf(design: Design, tone: Tone): string | null {
  const { duration_ps } = pulseFigures({ ...design.pulse, tones: [{ ...tone, delay: 0 }] });
  if (duration_ps < STRETCHED * tone.fwhm) return null;
  if (tone.gdd === 0) return 'dispersed';
  return tone.gdd > 0 ? 'chirped up' : 'chirped down';
}

/** `near π`, `near 3π`: what a resonant pulse without chirp turns the emitter by. */
function turn(area: number): string {
  const k = Math.round(area / Math.PI);
  return k === 0 ? 'below π/2' : `near ${k === 1 ? '' : k}π`;
}

/** What detunings count from: the resonance of that name and its distance from the pulse reference, meV. */
function resonances(design: Design): { readonly name: string; readonly center: number }[] {
  const { emitter, pulse } = design;
  const scheme = emitterModel(emitter.model).scheme(emitter);
  const reference = pulse.reference === 'two-photon' ? (scheme.twoPhoton ?? 0) : 0;
  const exciton = { name: EXCITON, center: -reference * HBAR };
  if (scheme.twoPhoton === null) return [exciton];
  return [exciton, { name: 'two-photon resonance', center: (scheme.twoPhoton - reference) * HBAR }];
}

interface Place {
  readonly resonance: string;
  readonly resonant: boolean;
  readonly text: string;
}

/** Where a tone stands: at a resonance, or above or below the nearest one. */
function placeOf(design: Design, tone: Tone): Place {
  const all = resonances(design).map(({ name, center }) => ({ name, above: tone.detuning - center }));
  const { name, above } = all.reduce((a, b) => (Math.abs(b.above) < Math.abs(a.above) ? b : a));
  const resonant = Math.abs(above) <= RESONANT * bandwidthOf(design, tone);
  const short = name === EXCITON ? 'resonant' : 'two-photon resonant';
  const text = resonant ? short : `detuned ${above > 0 ? 'above' : 'below'} the ${name}`;
  return { resonance: name, resonant, text };
}

function oneTone(design: Design, tone: Tone): string {
  const { resonance, resonant, text } = placeOf(design, tone);
  const chirp = chirpOf(design, tone);
  if (chirp !== null) return `${chirp}, ${text}`;
  return resonant && resonance === EXCITON ? `${text}, ${turn(tone.area)}` : text;
}

function moreTones(design: Design, tones: readonly Tone[]): string {
  const detunings = tones.map(({ detuning }) => detuning);
  const [low, high] = [Math.min(...detunings), Math.max(...detunings)];
  const width = Math.max(...tones.map((tone) => bandwidthOf(design, tone)));
  const chirp = tones.some((tone) => chirpOf(design, tone) !== null) ? ', chirped' : '';
  const count = tones.length === 2 ? 'two' : String(tones.length);
  if (high - low <= ONE_COLOUR * width) {
    return `${count} pulses of one colour, ${placeOf(design, tones[0]).text}${chirp}`;
  }
  const all = tones.length === 2 ? 'both' : 'all';
  const [{ name, center }] = resonances(design);
  const side =
    low > center
      ? `${all} above the ${name}`
      : high < center
        ? `${all} below the ${name}`
        : `on both sides of the ${name}`;
  return `${count}-colour, ${side}${chirp}`;
}

/** What kind of excitation a design is, in the words of the field; the same words for neighbours on a front. */
export function branchOf(design: Design): string {
  const tones = design.pulse.tones.filter(({ area }) => area >= NEGLIGIBLE);
  if (tones.length === 0) return 'no pulse';
  return tones.length === 1 ? oneTone(design, tones[0]) : moreTones(design, tones);
}
