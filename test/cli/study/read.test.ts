import { describe, expect, it } from 'vitest';
import { readStudy } from '../../../cli/study/index.js';
import { COMPLETE, MINIMAL, studyOf } from './support.js';

describe('a valid study', () => {
  it('gets every default where a key is left out', () => {
    const { study, remarks } = studyOf(MINIMAL);
    expect(study).toEqual({
      title: '',
      tuning: null,
      design: {
        emitter: {
          model: 'two-level',
          wavelength: 0.93,
          lifetime: 400,
          biexcitonLifetime: null,
          binding: null,
          splitting: 0,
          dephasing: 0,
          phonons: null,
        },
        pulse: {
          reference: 'exciton',
          tones: [
            {
              shape: 'gaussian',
              fwhm: 5,
              area: Math.PI,
              detuning: 0,
              gdd: 0,
              tod: 0,
              delay: 0,
              phase: 0,
              polarization: 0,
            },
          ],
        },
        collection: { line: 'exciton', polarization: 'all', efficiency: 1, filter: null },
        laser: null,
        drift: null,
      },
      parameters: [],
      ties: [],
      goal: {
        impurity: 'multiphoton',
        brightness: 'single',
        atLeast: null,
        front: { from: null, to: null, points: 25 },
        third: null,
        limits: [],
      },
      search: { evaluations: 20000, seed: 1, method: 'auto' },
    });
    expect(remarks).toEqual([]);
  });

  it('gets the defaults inside the sections that stand', () => {
    const text = MINIMAL.replace('two-level', 'cascade').replace('400 ps', '400 ps\n  binding: 3 meV');
    const more = `${text}collection: { filter: { fwhm: 30 GHz } }
laser: { pi_pulse: { energy: 1 pJ, fwhm: 5 ps } }
drift: { area: 2 % }
goal: { front: { points: 3 } }
search: {}
`;
    const { study } = studyOf(
      more.replace(
        '  binding',
        '  phonons: { coupling: 0.03 ps^2, cutoff: 2.2 1/ps, temperature: 4 K }\n  binding',
      ),
    );
    expect(study.design.emitter).toMatchObject({ biexcitonLifetime: 200, splitting: 0, binding: 3 });
    expect(study.design.emitter.phonons).toEqual({
      coupling: 0.03,
      cutoff: 2.2,
      temperature: 4,
      method: 'auto',
    });
    expect(study.design.collection.filter).toEqual({ fwhm: 30, center: 0 });
    expect(study.design.laser).toEqual({
      repetition: null,
      piPulse: { energy: 1000, fwhm: 5 },
      rejection: 0,
    });
    expect(study.design.drift).toEqual({
      ...{ area: 0.02, width: 0, detuning: 0 },
      ...{ filterCenter: 0, quantile: null },
    });
    expect(study.goal.front).toEqual({ from: null, to: null, points: 3 });
    expect(study.search).toEqual({ evaluations: 20000, seed: 1, method: 'auto' });
  });

  it('reads every key into internal units', () => {
    const { study } = studyOf(COMPLETE);
    expect(study.title).toBe('Every key');
    expect(study.design.emitter).toEqual({
      model: 'cascade',
      wavelength: 0.9253,
      lifetime: 400,
      biexcitonLifetime: 210,
      binding: 2.4,
      splitting: 0.008,
      dephasing: 0.0001,
      phonons: { coupling: 0.03, cutoff: 2.2, temperature: 4, method: 'exact' },
    });
    expect(study.design.pulse).toEqual({
      reference: 'two-photon',
      tones: [
        {
          shape: 'sech',
          fwhm: 2,
          area: 0.5 * Math.PI,
          detuning: 0.2,
          gdd: 0,
          tod: 3,
          delay: 1,
          phase: 30 * (Math.PI / 180),
          polarization: Math.PI / 4,
        },
        {
          shape: 'square',
          fwhm: 2,
          area: 2 * Math.PI,
          detuning: 0,
          gdd: 0,
          tod: 0,
          delay: -5,
          phase: 0,
          polarization: 0,
        },
      ],
    });
    expect(study.design.collection).toEqual({
      line: 'biexciton',
      polarization: 'h',
      efficiency: 0.65,
      filter: { fwhm: 30, center: -5 },
    });
    expect(study.design.laser).toEqual({ repetition: 76, piPulse: { energy: 12, fwhm: 5 }, rejection: 1e-6 });
    expect(study.design.drift).toEqual({
      ...{ area: 0.02, width: 0.01, detuning: 0.005 },
      ...{ filterCenter: 1, quantile: 0.95 },
    });
    expect(study.goal).toEqual({
      impurity: 'g2',
      brightness: 'any',
      atLeast: 0.6,
      front: { from: 0.4, to: 0.64, points: 9 },
      third: { axis: 'energy', slices: 3 },
      limits: [
        { figure: 'pulse.energy_pi_units', atMost: 12, atLeast: null },
        { figure: 'pulse.energy_fj', atMost: 150, atLeast: null },
        { figure: 'pulse.peak_rabi_per_ps', atMost: 2.5, atLeast: null },
        { figure: 'pulse.duration_ps', atMost: 30, atLeast: 2 },
        { figure: 'collected.leakage', atMost: 1e-3, atLeast: null },
      ],
    });
    expect(study.search).toEqual({ evaluations: 200, seed: 7, method: 'nsga2' });
  });

  it('lists free parameters and ties in the order of the file', () => {
    const { study } = studyOf(COMPLETE);
    expect(study.parameters).toEqual([
      { kind: 'range', path: 'pulse.tones.0.fwhm', from: 2, to: 40, scale: 'log' },
      { kind: 'range', path: 'pulse.tones.0.area', from: 0.5 * Math.PI, to: 3 * Math.PI, scale: 'linear' },
      { kind: 'list', path: 'pulse.tones.0.gdd', values: [0, 10, 25] },
      { kind: 'range', path: 'pulse.tones.1.delay', from: -5, to: 50, scale: 'linear' },
      { kind: 'range', path: 'collection.filter.center', from: -5, to: 5, scale: 'linear' },
    ]);
    expect(study.ties).toEqual([{ path: 'pulse.tones.1.fwhm', sameAs: 'pulse.tones.0.fwhm' }]);
    const swapped = studyOf(
      MINIMAL.replace('fwhm: 5 ps', 'area: { from: 1 pi, to: 2 pi }').replace(
        'area: 1 pi',
        'fwhm: { of: [2 ps] }',
      ),
    );
    expect(swapped.study.parameters.map((p) => p.path)).toEqual(['pulse.tones.0.area', 'pulse.tones.0.fwhm']);
  });

  it('follows ties to fixed values, defaults and other ties', () => {
    const tones = `
    - { fwhm: 5 ps, area: 1 pi, gdd: { same_as: tones.2.gdd } }
    - { fwhm: { same_as: tones.0.fwhm }, area: { same_as: pulse.tones.2.area }, delay: { same_as: tones.0.delay } }
    - { fwhm: { same_as: tones.1.fwhm }, area: { of: [3 pi, 4 pi] }, gdd: { from: 1 ps^2, to: 2 ps^2 } }`;
    const { study } = studyOf(`${MINIMAL.slice(0, MINIMAL.indexOf('    -')).trimEnd()}${tones}\n`);
    expect(study.design.pulse.tones.map((t) => t.fwhm)).toEqual([5, 5, 5]);
    expect(study.design.pulse.tones[1]).toMatchObject({ area: 3 * Math.PI, delay: 0 });
    expect(study.design.pulse.tones[0].gdd).toBe(1);
    expect(study.ties).toHaveLength(5);
  });

  it('takes JSON, also indented with tabs', () => {
    const json = {
      pulsewright: 1,
      emitter: { model: 'two-level', lifetime: '400 ps' },
      pulse: { tones: [{ fwhm: '5 ps', area: '1 pi' }] },
    };
    const yaml = studyOf(MINIMAL);
    expect(studyOf(JSON.stringify(json))).toEqual(yaml);
    expect(studyOf(JSON.stringify(json, null, '\t'))).toEqual(yaml);
  });

  it('takes anchors, a byte-order mark and Windows line ends', () => {
    const anchored = MINIMAL.replace('400 ps', '&t 400 ps').replace('5 ps', '*t');
    expect(studyOf(anchored).study.design.pulse.tones[0].fwhm).toBe(400);
    expect(studyOf(`\ufeff${MINIMAL}`).study).toEqual(studyOf(MINIMAL).study);
    expect(studyOf(MINIMAL.replaceAll('\n', '\r\n')).study).toEqual(studyOf(MINIMAL).study);
  });

  it('treats a drift of zero as none', () => {
    expect(studyOf(`${MINIMAL}drift: { area: 0 % }\n`).study.design.drift).toBeNull();
  });
});

describe('the hash', () => {
  const hash = (text: string) => studyOf(text).hash;

  it('does not change with comments, spacing, quoting, units or written defaults', () => {
    const base = hash(MINIMAL);
    expect(base).toMatch(/^[0-9a-f]{64}$/);
    expect(hash(`# a comment\n\n${MINIMAL.replace('400 ps', '"0.4 ns"   # lifetime')}`)).toBe(base);
    expect(hash(`${MINIMAL}search: { seed: 1 }\ngoal: {}\n`)).toBe(base);
    expect(
      hash(
        MINIMAL.replace('  model: two-level\n  lifetime: 400 ps', '  lifetime: 400 ps\n  model: two-level'),
      ),
    ).toBe(base);
  });

  it('changes with every value', () => {
    const lines = COMPLETE.split('\n');
    const changed = [
      COMPLETE.replace('Every key', 'every key'),
      COMPLETE.replace('400 ps', '401 ps'),
      COMPLETE.replace('scale: log', 'scale: linear'),
      COMPLETE.replace('25 ps^2', '26 ps^2'),
      COMPLETE.replace('tones.0.fwhm', 'tones.0.delay').replace('delay: 1 ps', 'delay: 2 ps'),
      COMPLETE.replace('points: 9', 'points: 8'),
      COMPLETE.replace('seed: 7', 'seed: 8'),
      COMPLETE.replace('width: 1 %', 'width: 2 %'),
    ].map(hash);
    expect(new Set([hash(COMPLETE), ...changed]).size).toBe(changed.length + 1);
    expect(lines.length).toBeGreaterThan(50);
  });
});

describe('remarks', () => {
  const remarks = (text: string) => studyOf(text).remarks.map((r) => [r.line, r.column, r.path, r.text]);

  it('tells of conversions through h at their place', () => {
    expect(remarks(`${MINIMAL}      detuning: 10 GHz\ncollection: { filter: { fwhm: 80 ueV } }\n`)).toEqual([
      [9, 17, 'pulse.tones.0.detuning', '10 GHz converted through h to 0.041356677 meV'],
      [10, 31, 'collection.filter.fwhm', '80 ueV converted through h to 19.3439139 GHz'],
    ]);
  });

  it('warns of tones that a crossed polariser lets through', () => {
    const crossed = `${MINIMAL}    - { fwhm: 5 ps, area: 1 pi, polarization: 90 deg }\ncollection: { polarization: crossed }\n`;
    expect(remarks(crossed)).toEqual([
      [9, 47, 'pulse.tones.1.polarization', expect.stringContaining('without rejection')],
    ]);
    expect(remarks(crossed.replace('90 deg', '0 deg'))).toEqual([]);
    expect(remarks(crossed.replace('90 deg', '{ from: 0 deg, to: 9 deg }'))).toHaveLength(1);
    expect(remarks(crossed.replace('90 deg', '{ same_as: tones.0.polarization }'))).toEqual([]);
    expect(remarks(crossed.replace('crossed', 'all'))).toEqual([]);
  });

  it('says which wavelength leakage is counted with when none is given', () => {
    const laser = `${MINIMAL}laser: { rejection: 1e-6, pi_pulse: { energy: 12 fJ, fwhm: 5 ps } }\n`;
    expect(remarks(laser)).toEqual([
      [2, 1, 'emitter.wavelength', 'not given: photon energies are those of 930 nm'],
    ]);
    expect(remarks(laser.replace('1e-6', '0'))).toEqual([
      [9, 21, 'laser.rejection', 'zero or not given: no laser light leaks into the collection'],
    ]);
  });

  it('says when phonons or pulses do nothing', () => {
    const idle = MINIMAL.replace('1 pi', '0 pi').replace(
      '400 ps',
      '400 ps\n  phonons: { coupling: 0 ps^2, cutoff: 2.2 1/ps, temperature: 4 K }',
    );
    expect(remarks(idle).map(([, , path]) => path)).toEqual(['emitter.phonons.coupling', 'pulse.tones']);
  });
});

describe('overrides', () => {
  const at = (path: string, value: string) => [{ path, value }];

  it('replace, add and take away values before anything is checked', () => {
    const tone = (path: string, value: string) => studyOf(COMPLETE, at(path, value)).study;
    expect(tone('tones.0.fwhm', '7 ps').design.pulse.tones.map((t) => t.fwhm)).toEqual([7, 7]);
    expect(tone('pulse.tones.0.fwhm', '7 ps').parameters).toHaveLength(4);
    expect(tone('tones.1.gdd', '{ from: 1 ps^2, to: 3 ps^2 }').parameters).toHaveLength(6);
    expect(tone('drift', '').design.drift).toBeNull();
    expect(tone('collection.filter', 'null').design.collection.filter).toBeNull();
    const made = studyOf(MINIMAL, at('collection.filter.fwhm', '30 GHz')).study;
    expect(made.design.collection.filter).toEqual({ fwhm: 30, center: 0 });
    const repaired = studyOf(MINIMAL.replace('5 ps', '-5 ps'), at('tones.0.fwhm', '5 ps'));
    expect(repaired.hash).toBe(studyOf(MINIMAL).hash);
  });

  it('name the override as the place of a fault', () => {
    const faults = (path: string, value: string) => {
      const result = readStudy(new TextEncoder().encode(MINIMAL), 'study.yaml', at(path, value));
      return result.kind === 'faults' ? result.faults : [];
    };
    expect(faults('tones.0.fwhm', '-3 ps')).toEqual([
      {
        file: '--set',
        line: 1,
        column: 14,
        path: 'pulse.tones.0.fwhm',
        found: '-3 ps',
        wanted: 'more than 0 ps',
      },
    ]);
    expect(faults('tones.0.fwmh', '3 ps')).toMatchObject([
      { file: '--set', line: 1, column: 1, wanted: 'pulse.tones.0.fwhm (the nearest path)' },
    ]);
    expect(faults('tones.4.fwhm', '3 ps')).toMatchObject([
      { wanted: 'an index from 0 to 0: the study has 1 at pulse.tones' },
    ]);
    expect(faults('tones.0.fwhm', '{ from: 2 ps')).toMatchObject([
      { file: '--set', line: 1, path: 'pulse.tones.0.fwhm' },
    ]);
    expect(faults('tones.0', '3 ps')).toHaveLength(1);
    expect(faults('', '3 ps')).toHaveLength(1);
    expect(faults('emitter.lifetime.x', '3 ps')).toHaveLength(1);
  });
});
