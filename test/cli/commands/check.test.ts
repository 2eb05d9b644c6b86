import { describe, expect, it } from 'vitest';
import { FIXED, FREE, invoke, studyFile } from './invoke.js';

interface Facts {
  readonly designs: readonly {
    readonly at: string;
    readonly tones: readonly Record<string, number>[];
    readonly pulse: Record<string, number>;
    readonly emitter: Record<string, number>;
    readonly propagator: { readonly window_ps: number[]; readonly frame_mev: number; readonly steps: number };
  }[];
  readonly parameters: readonly { path: string; allowed: string }[];
  readonly faults: readonly { line: number; column: number; path: string }[];
}

const cascade = (reference: string, tone: string, emitter = 'splitting: 0 ueV') => `pulsewright: 1
emitter: { model: cascade, lifetime: 400 ps, binding: 3 meV, ${emitter} }
pulse: { reference: ${reference}, tones: [{ area: 0.1 pi, ${tone} }] }
`;

async function facts(text: string): Promise<Facts> {
  const { out } = await invoke(['check', studyFile(text), '--json']);
  return JSON.parse(out) as Facts;
}

describe('check', () => {
  it('derives the quantities of a π pulse', async () => {
    const { designs } = await facts(FIXED);
    const tone = designs[0].tones[0];
    // Gaussian: time–bandwidth product 2 ln2/π (textbook, Diels & Rudolph, Ultrashort Laser Pulse Phenomena).
    expect(tone.time_bandwidth_product).toBeCloseTo((2 * Math.LN2) / Math.PI, 6);
    expect(tone.bandwidth_ghz).toBeCloseTo((1000 * 2 * Math.LN2) / Math.PI / 5, 3);
    // By definition of the measured π pulse.
    expect(tone.energy_pi_units).toBeCloseTo(1, 9);
    expect(tone.energy_fj).toBeCloseTo(12, 6);
    // Peak of Θ/(√(2π) σ), σ = τ/(2√ln2).
    const sigma = 5 / (2 * Math.sqrt(Math.LN2));
    expect(tone.peak_rabi_per_ps).toBeCloseTo(Math.PI / (Math.sqrt(2 * Math.PI) * sigma), 4);
    expect(tone.peak_rabi_mev / tone.peak_rabi_per_ps).toBeCloseTo(0.6582119569, 9);
    expect(designs[0].propagator.window_ps[0]).toBeLessThan(-5);
    expect(designs[0].propagator.steps).toBeGreaterThan(10);
  });

  it('gives duration after dispersion by the closed form of a chirped Gaussian (Diels & Rudolph)', async () => {
    const { designs } = await facts(FIXED.replace('area: 1 pi', 'area: 1 pi, gdd: 40 ps^2'));
    const grown = 5 * Math.sqrt(1 + ((4 * Math.LN2 * 40) / 25) ** 2);
    expect(designs[0].tones[0].duration_ps / grown).toBeCloseTo(1, 4);
    expect(designs[0].tones[0].time_bandwidth_product).toBeCloseTo(0.4413, 4);
  });

  it('gives the distance of each tone from each line of a cascade', async () => {
    const { designs } = await facts(`pulsewright: 1
emitter: { model: cascade, lifetime: 400 ps, binding: 3 meV }
pulse: { reference: two-photon, tones: [{ fwhm: 8 ps, area: 3 pi, detuning: 0.25 meV }] }
`);
    const above = designs[0].tones[0].above_line_mev as unknown as Record<string, number>;
    // Half the binding energy on each side of the resonance; no splitting.
    for (const axis of ['h', 'v']) {
      expect(above[`exciton_${axis}`]).toBeCloseTo(-1.25, 9);
      expect(above[`biexciton_${axis}`]).toBeCloseTo(1.75, 9);
    }
    expect(above.two_photon).toBeCloseTo(0.25, 9);
  });

  it('tells the components of each line apart by the splitting', async () => {
    const { designs } = await facts(cascade('exciton', 'fwhm: 8 ps', 'splitting: 40 ueV'));
    const above = designs[0].tones[0].above_line_mev as unknown as Record<string, number>;
    // h above v by f; b→h is lower than b→v by the same f.
    expect(above.exciton_h).toBeCloseTo(-0.02, 9);
    expect(above.exciton_v).toBeCloseTo(0.02, 9);
    expect(above.biexciton_h).toBeCloseTo(3.02, 9);
    expect(above.biexciton_v).toBeCloseTo(2.98, 9);
  });

  // Gaussian: spectral FWHM 0.4413/τ, that is 1.825 meV·ps/τ; the binding energy is 3 meV.
  it.each([
    ['exciton', 'fwhm: 0.6 ps', ['biexciton']],
    ['exciton', 'fwhm: 0.62 ps', []],
    ['exciton', 'fwhm: 0.62 ps, detuning: -3 meV', []],
    ['exciton', 'fwhm: 0.6 ps, detuning: -3 meV', ['exciton']],
    ['two-photon', 'fwhm: 1.2 ps', ['exciton', 'biexciton']],
    ['two-photon', 'fwhm: 1.23 ps', []],
    ['two-photon', 'fwhm: 1.23 ps, detuning: 0.1 meV', ['exciton']],
    ['two-photon', 'fwhm: 1.23 ps, detuning: 1.5 meV', []],
  ])('warns when the bandwidth reaches the other transition: %s, %s', async (reference, tone, lines) => {
    const text = cascade(reference, tone);
    const { designs } = await facts(text);
    const reaches = designs[0].tones[0].reaches as unknown as { line: string }[];
    expect(reaches.map(({ line }) => line)).toEqual(lines);
    const { out } = await invoke(['check', studyFile(text)]);
    for (const line of lines) expect(out).toMatch(new RegExp(`tone 0: its bandwidth of .* ${line} line`));
    expect(out.includes('warnings')).toBe(lines.length > 0);
  });

  it('prints the bias to set', async () => {
    const tuning = 'tuning: { slope: 5 ueV/mV, bias: 200 mV, range: [100 mV, 260 mV] }';
    const text = cascade('two-photon', 'fwhm: 8 ps, detuning: 0.1 meV', tuning);
    const { designs } = await facts(text);
    expect(designs[0].emitter.bias_mv).toBeCloseTo(180, 9);
    expect((await invoke(['check', studyFile(text)])).out).toMatch(/bias to set +180\.0 mV/);
    expect((await invoke(['check', studyFile(FIXED)])).out).not.toContain('bias');
  });

  it('shows both ends of free parameters and lists them', async () => {
    const { designs, parameters } = await facts(FREE);
    expect(designs.map(({ at }) => at)).toEqual(['all lowest', 'all highest']);
    expect(designs.map(({ tones }) => tones[0].fwhm_ps)).toEqual([3, 12]);
    expect(parameters[0]).toEqual({
      path: 'pulse.tones.0.fwhm',
      allowed: 'from 3.00 ps to 12.0 ps, logarithmic',
    });
    const { out } = await invoke(['check', studyFile(FREE)]);
    expect(out).toContain('bandwidth (FWHM)');
    expect(out).toContain('pulse.tones.0.area: from 0.300 pi to 1.40 pi');
  });

  it('says what it converted', async () => {
    const { out } = await invoke([
      'check',
      studyFile(FIXED.replace('area: 1 pi', 'area: 1 pi, detuning: 30 GHz')),
    ]);
    expect(out).toMatch(/study\.yaml:4:\d+ pulse\.tones\.0\.detuning: .*through h/);
  });

  it('lists all faults at their places, exit 2, also as JSON', async () => {
    const path = studyFile(
      FIXED.replace('5 ps, area: 1 pi', '-5 ps, area: 1 meV').replace('lifetime', 'lifetme'),
    );
    const { code, out, err } = await invoke(['check', path]);
    expect(code).toBe(2);
    expect(out).toBe('');
    expect(err).toMatch(/study\.yaml:3:\d+ emitter\.lifetme/);
    expect(err).toMatch(/study\.yaml:4:\d+ pulse\.tones\.0\.fwhm: got -5 ps; needs more than 0 ps/);
    expect(err).toMatch(/study\.yaml:4:\d+ pulse\.tones\.0\.area: got 1 meV/);
    const json = await invoke(['check', path, '--json']);
    expect(json.code).toBe(2);
    expect((JSON.parse(json.out) as Facts).faults.map(({ line }) => line).sort()).toEqual([3, 3, 4, 4]);
  });

  it('describes the phonon bath and says which method auto takes and why', async () => {
    const bath = 'phonons: { coupling: 0.03 ps^2, cutoff: 2.2 1/ps, temperature: TEMPERATURE }';
    const study = (temperature: string) =>
      FIXED.replace('wavelength', `${bath.replace('TEMPERATURE', temperature)}, wavelength`);
    const read = async (temperature: string) => {
      const { out } = await invoke(['check', studyFile(study(temperature)), '--json']);
      return (JSON.parse(out) as { designs: { phonons: Record<string, number> }[] }).designs[0].phonons;
    };
    // Independent-boson model (Mahan, Many-Particle Physics): φ(0) = Aω_c²/2 at T = 0, and ħA√πω_c³/4.
    const cold = await read('0 K');
    expect(cold['zero_phonon_share']).toBeCloseTo(Math.exp((-0.03 * 2.2 ** 2) / 2), 9);
    expect(cold['relaxation_energy_mev']).toBeCloseTo(
      (0.6582119569 * 0.03 * Math.sqrt(Math.PI) * 2.2 ** 3) / 4,
      9,
    );
    const warm = await read('20 K');
    expect(warm['zero_phonon_share']).toBeLessThan(cold['zero_phonon_share']);
    expect(warm['memory_time_ps']).toBeGreaterThan(1);
    expect(warm['memory_time_ps']).toBeLessThan(5);
    expect(warm['auto']).toMatchObject({ method: 'polaron' });
    const { out } = await invoke(['check', studyFile(study('4 K'))]);
    expect(out).toMatch(/zero-phonon share ⟨B⟩² +0\.9\d/);
    expect(out).toMatch(/relaxation energy \(polaron shift\) +0\.0932 meV/);
    expect(out).toMatch(/fit error, exact method \(usual size\) +\d\.\de-\d \(\d terms\)/);
    expect(out).toContain('auto: polaron, for a resonant drive');
    expect((await invoke(['check', studyFile(FIXED)])).out).not.toContain('phonons');
  });
});
