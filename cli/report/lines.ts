import { type Design, GHZ_PER_MEV, HBAR, type Scheme, situation, type Tone } from '../../core/index.js';

/** Name of the two-photon resonance among the distances of a tone. */
export const TWO_PHOTON = 'two_photon';

/** A line that the bandwidth of a tone reaches although the tone stands nearer to another resonance. */
export interface ReachedLine {
  readonly line: string;
  /** Centre of the tone minus the nearest component of the line that the tone drives, meV. */
  readonly above_mev: number;
}

/** Where a tone stands among the resonances of the emitter. */
export interface ToneLines {
  /**
   * Centre of the tone minus each line, meV: by line, or by line and polarisation (`exciton_h`) where they differ, and
   * minus the two-photon resonance.
   */
  readonly above_line_mev: Readonly<Record<string, number>>;
  readonly reaches: readonly ReachedLine[];
}

interface Component {
  readonly name: string;
  readonly line: string;
  /** Relative to the mean exciton line, meV. */
  readonly center: number;
  readonly driven: boolean;
}

/** A projection below this is rounding of a right angle. */
const UNDRIVEN = 1e-9;

function components(scheme: Scheme, polarization: number): Component[] {
  const { levels, transitions, decays, projection } = scheme;
  return decays.map(({ from, to, line, polarization: axis }) => {
    const transition = transitions.find(({ lower, upper }) => lower === to && upper === from);
    const weight =
      transition === undefined
        ? 0
        : transition.weightH * Math.cos(polarization) + transition.weightV * Math.sin(polarization);
    return {
      name: axis === 'any' ? line : `${line}_${axis}`,
      line,
      center: (levels[from].offset - levels[to].offset) * HBAR,
      driven: transition !== undefined && (projection === 'full' || Math.abs(weight) > UNDRIVEN),
    };
  });
}

/** Lines other than the nearest resonance whose distance is less than the bandwidth (spectral FWHM, meV). */
function reached(
  all: readonly Component[],
  tone: number,
  twoPhoton: number | null,
  width: number,
): ReachedLine[] {
  const driven = all.filter((c) => c.driven).map(({ line, center }) => ({ line, above: tone - center }));
  const nearest = [...driven, ...(twoPhoton === null ? [] : [{ line: TWO_PHOTON, above: tone - twoPhoton }])]
    .sort((a, b) => Math.abs(a.above) - Math.abs(b.above))
    .at(0)?.line;
  const others = [...new Set(driven.map(({ line }) => line))].filter((line) => line !== nearest);
  return others.flatMap((line) => {
    const of = driven.filter((c) => c.line === line).map(({ above }) => above);
    const above = of.reduce((a, b) => (Math.abs(b) < Math.abs(a) ? b : a));
    return Math.abs(above) < width ? [{ line, above_mev: above }] : [];
  });
}

/**
 * Distances of a tone from every line of the emitter.
 * @param bandwidth spectral intensity FWHM of the tone, GHz
 */
export function toneLines(design: Design, tone: Tone, bandwidth: number): ToneLines {
  const { scheme } = situation(design);
  const twoPhoton = scheme.twoPhoton === null ? null : scheme.twoPhoton * HBAR;
  const reference = design.pulse.reference === 'two-photon' ? (twoPhoton ?? 0) : 0;
  const center = reference + tone.detuning;
  const all = components(scheme, tone.polarization);
  return {
    above_line_mev: {
      ...Object.fromEntries(all.map((c) => [c.name, center - c.center])),
      ...(twoPhoton === null ? {} : { [TWO_PHOTON]: center - twoPhoton }),
    },
    reaches: reached(all, center, twoPhoton, bandwidth / GHZ_PER_MEV),
  };
}

/** `biexciton_h` → `biexciton line (h)`, the two-photon resonance in words. */
export function lineText(name: string): string {
  if (name === TWO_PHOTON) return 'two-photon resonance';
  const [line, axis] = name.split('_');
  return axis === undefined ? `${line} line` : `${line} line (${axis})`;
}
