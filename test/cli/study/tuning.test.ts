import { describe, expect, it } from 'vitest';
import { biasOf, formatRemark, writeDesign } from '../../../cli/study/index.js';
import { printed, studyOf } from './support.js';

/** Detunings from −0.3 to 0.5 meV: line 8 has the tone. */
const study = (detuning: string, more = '', slope = '5 ueV/mV') => `pulsewright: 1
emitter:
  model: two-level
  lifetime: 400 ps
  tuning: { slope: ${slope}, bias: 200 mV, range: [100 mV, 260 mV] }
pulse:
  tones:
    - { fwhm: 5 ps, area: 1 pi, detuning: ${detuning} }
${more}`;

const tuned = (text: string) => {
  const { study: read, remarks } = studyOf(text);
  return {
    parameters: read.parameters,
    detuning: read.design.pulse.tones[0].detuning,
    bias: biasOf(read, read.design),
    remarks: remarks.map(formatRemark),
  };
};

describe('the bias of a detuning', () => {
  // Linear Stark shift: laser − line(V) = −slope·(V − bias). By hand: 0.2 meV at 5 ueV/mV is 40 mV.
  it.each([
    ['0 meV', '5 ueV/mV', 200],
    ['0.2 meV', '5 ueV/mV', 160],
    ['-0.2 meV', '5 meV/V', 240],
    ['0.2 meV', '-5 ueV/mV', 240],
    ['-0.3 meV', '0.005 meV/mV', 260],
    ['0.5 meV', '5000 ueV/V', 100],
  ])('of %s at %s is %d mV', (detuning, slope, bias) => {
    expect(tuned(study(detuning, '', slope)).bias).toBeCloseTo(bias, 9);
  });

  it('is null without tuning', () => {
    const { study: read } = studyOf(study('0 meV').replace(/ {2}tuning.*\n/, ''));
    expect(read.tuning).toBeNull();
    expect(biasOf(read, read.design)).toBeNull();
  });

  it('stays with a written design, at the end of the plateau too', () => {
    const { study: read } = studyOf(study('{ from: -3 meV, to: 3 meV }'));
    const [range] = read.parameters;
    if (range.kind !== 'range') throw new Error('no range');
    for (const end of [range.from, range.to]) {
      const back = studyOf(writeDesign(read, [end], 'x')).study;
      expect(back.tuning).toEqual(read.tuning);
      expect(back.design.pulse.tones[0].detuning).toBe(end);
    }
  });

  it('is part of the hash', () => {
    const hashes = [study('0 meV'), study('0 meV', '', '6 ueV/mV'), study('0 meV').replace('260', '250')].map(
      (text) => studyOf(text).hash,
    );
    expect(new Set(hashes).size).toBe(3);
  });
});

describe('the plateau', () => {
  const reach = '-300 ueV to 500 ueV: what the bias range of emitter.tuning reaches';

  it('refuses a fixed detuning outside', () => {
    expect(printed(study('0.6 meV'))).toEqual([
      `study.yaml:8:43 pulse.tones.0.detuning: got 600 ueV; needs ${reach}`,
    ]);
    expect(printed(study('0 meV'), [{ path: 'tones.0.detuning', value: '-1 meV' }])[0]).toContain(reach);
  });

  it('narrows a range and says so', () => {
    const { parameters, remarks, detuning } = tuned(study('{ from: -1 meV, to: 0.1 meV }'));
    expect(parameters).toEqual([
      { kind: 'range', path: 'pulse.tones.0.detuning', from: -0.3, to: 0.1, scale: 'linear' },
    ]);
    expect(detuning).toBe(-0.3);
    expect(remarks).toEqual([
      'study.yaml:8:43 pulse.tones.0.detuning: narrowed to -300 ueV to 100 ueV: what the bias range of emitter.tuning reaches',
    ]);
  });

  it('leaves a range inside alone', () => {
    const { parameters, remarks } = tuned(study('{ from: 0.01 meV, to: 0.4 meV, scale: log }'));
    expect(parameters[0]).toMatchObject({ from: 0.01, to: 0.4, scale: 'log' });
    expect(remarks).toEqual([]);
  });

  it('refuses a range that does not reach it', () => {
    expect(printed(study('{ from: 0.5 meV, to: 2 meV }'))).toEqual([
      `study.yaml:8:43 pulse.tones.0.detuning: got 500 ueV to 2 meV; needs a part of ${reach}`,
    ]);
  });

  it('drops what a list has outside, and refuses a list with nothing inside', () => {
    const { parameters, remarks, detuning } = tuned(study('{ of: [1 meV, 0.1 meV, 0 meV, -2 meV] }'));
    expect(parameters).toEqual([{ kind: 'list', path: 'pulse.tones.0.detuning', values: [0.1, 0] }]);
    expect(detuning).toBe(0.1);
    expect(remarks).toEqual([
      `study.yaml:8:43 pulse.tones.0.detuning: without 1 meV, -2 meV: allowed are ${reach}`,
    ]);
    expect(printed(study('{ of: [1 meV, -2 meV] }'))).toEqual([
      `study.yaml:8:43 pulse.tones.0.detuning: got 1 meV, -2 meV; needs a value from ${reach}`,
    ]);
  });

  it('follows a tie to where the value stands', () => {
    const second = (detuning: string) => `    - { fwhm: 5 ps, area: 1 pi, detuning: ${detuning} }\n`;
    const tied = (detuning: string) => study('{ same_as: tones.1.detuning }', second(detuning));
    const { parameters, detuning } = tuned(tied('{ from: -1 meV, to: 1 meV }'));
    expect(parameters[0]).toMatchObject({ path: 'pulse.tones.1.detuning', from: -0.3, to: 0.5 });
    expect(detuning).toBe(-0.3);
    expect(printed(tied('-9 meV'))).toEqual([
      `study.yaml:9:43 pulse.tones.1.detuning: got -9 meV; needs ${reach}`,
    ]);
    // The second tone alone may stand anywhere.
    expect(printed(study('0 meV', second('-9 meV')))).toEqual([]);
  });
});
