import { describe, expect, it } from 'vitest';
import { COMPLETE, faultsOf, MINIMAL, printed } from './support.js';

const FREE =
  'pulse.tones[] (fwhm, area, detuning, gdd, tod, delay, phase, polarization) and collection.filter (fwhm, center)';
const TIME = 'a time in fs, ps, ns or us, such as 5 ps';

/** One tone on line 7 in place of the one of the smallest study. */
const tone = (keys: string) => MINIMAL.replace(/ {4}- [\s\S]*$/, `    - { ${keys} }\n`);
const emitter = (line: string) => MINIMAL.replace('400 ps\n', `400 ps\n  ${line}\n`);
const after = (line: string) => `${MINIMAL}${line}\n`;
const cascade = (line: string) => emitter(line).replace('two-level', 'cascade');

/** Each fault alone, with its exact place: text, then the whole message. Positions are counted by hand. */
const single: [string, string, string][] = [
  [
    'wrong unit',
    MINIMAL.replace('5 ps', '5 kg'),
    `7:13 pulse.tones.0.fwhm: got 5 kg (unknown unit kg); needs ${TIME}`,
  ],
  [
    'wrong dimension',
    MINIMAL.replace('5 ps', '5 meV'),
    `7:13 pulse.tones.0.fwhm: got 5 meV (an energy); needs ${TIME}`,
  ],
  ['missing unit', MINIMAL.replace('5 ps', '"5"'), `7:13 pulse.tones.0.fwhm: got 5 (no unit); needs ${TIME}`],
  ['bare number', MINIMAL.replace('5 ps', '5'), `7:13 pulse.tones.0.fwhm: got 5 (no unit); needs ${TIME}`],
  [
    'zero without unit',
    after('      gdd: 0'),
    '9:12 pulse.tones.0.gdd: got 0 (no unit); needs a group-delay dispersion in fs^2 or ps^2, such as 40 ps^2',
  ],
  [
    'negative width',
    MINIMAL.replace('5 ps', '-3 ps'),
    '7:13 pulse.tones.0.fwhm: got -3 ps; needs more than 0 ps',
  ],
  [
    'negative area',
    MINIMAL.replace('1 pi', '-1 pi'),
    '8:13 pulse.tones.0.area: got -1 pi; needs at least 0 pi',
  ],
  ['infinite', MINIMAL.replace('5 ps', '.inf'), `7:13 pulse.tones.0.fwhm: got .inf; needs ${TIME}`],
  [
    'not a number',
    after('collection: { efficiency: .nan }'),
    '9:27 collection.efficiency: got .nan; needs a pure number or a percentage, such as 0.65',
  ],
  [
    'overflow',
    MINIMAL.replace('5 ps', '1e999 ps'),
    `7:13 pulse.tones.0.fwhm: got 1e999 ps (too large); needs ${TIME}`,
  ],
  ['empty value', MINIMAL.replace('5 ps', ''), `7:13 pulse.tones.0.fwhm: got nothing; needs ${TIME}`],
  [
    'a list for a value',
    MINIMAL.replace('5 ps', '[5 ps]'),
    '7:13 pulse.tones.0.fwhm: got a list of 1; needs { from, to }, { of: [...] } or { same_as: path } for a free value',
  ],
  [
    'a boolean for a value',
    MINIMAL.replace('5 ps', 'true'),
    `7:13 pulse.tones.0.fwhm: got true; needs ${TIME}`,
  ],
  [
    'empty range',
    tone('fwhm: { from: 2 ps, to: 2 ps }, area: 1 pi'),
    '7:17 pulse.tones.0.fwhm: got an empty range from 2 ps to 2 ps; needs from below to',
  ],
  [
    'reversed range',
    tone('fwhm: { from: 4 ps, to: 2 ps }, area: 1 pi'),
    '7:17 pulse.tones.0.fwhm: got a reversed range from 4 ps to 2 ps; needs from below to',
  ],
  [
    'range too wide for its width to be a number',
    tone('fwhm: 5 ps, area: 1 pi, gdd: { from: -1e308 ps^2, to: 1e308 ps^2 }'),
    '7:40 pulse.tones.0.gdd: got a range from -1e308 ps^2 to 1e308 ps^2; needs a range whose width is a finite number',
  ],
  [
    'range with one end',
    tone('fwhm: { from: 4 ps }, area: 1 pi'),
    '7:15 pulse.tones.0.fwhm: got a range without to; needs both ends: { from, to }',
  ],
  [
    'range below the bound',
    tone('fwhm: { from: 0 ps, to: 2 ps }, area: 1 pi'),
    '7:23 pulse.tones.0.fwhm.from: got 0 ps; needs more than 0 ps',
  ],
  [
    'range end of another dimension',
    tone('fwhm: { from: 1 ps, to: 2 pi }, area: 1 pi'),
    `7:33 pulse.tones.0.fwhm.to: got 2 pi (a pulse area); needs ${TIME}`,
  ],
  [
    'logarithm from zero',
    tone('fwhm: 5 ps, area: { from: 0 pi, to: 2 pi, scale: log }'),
    '7:35 pulse.tones.0.area.from: got 0 pi with scale: log; needs a start above zero, or scale: linear',
  ],
  [
    'unknown scale',
    tone('fwhm: 5 ps, area: { from: 1 pi, to: 2 pi, scale: cubic }'),
    '7:58 pulse.tones.0.area.scale: got cubic; needs linear or log',
  ],
  [
    'misspelt key of a range',
    tone('fwhm: 5 ps, area: { from: 1 pi, to: 2 pi, scael: log }'),
    '7:51 pulse.tones.0.area.scael: got the unknown key scael; needs scale (the nearest key here)',
  ],
  [
    'no free form',
    tone('fwhm: { min: 1 ps, max: 2 ps }, area: 1 pi'),
    '7:15 pulse.tones.0.fwhm: got a mapping of min, max; needs { from, to }, { of: [...] } or { same_as: path }',
  ],
  [
    'list with one wrong unit',
    tone('fwhm: 5 ps, area: 1 pi, gdd: { of: [1 ps^2, 2 ps, 3 ps^2] }'),
    '7:53 pulse.tones.0.gdd.of.1: got 2 ps (a time); needs a group-delay dispersion in fs^2 or ps^2, such as 40 ps^2',
  ],
  [
    'empty list',
    tone('fwhm: { of: [] }, area: 1 pi'),
    '7:21 pulse.tones.0.fwhm.of: got an empty list; needs a list of 1 to 1000 values',
  ],
  [
    'list with a value twice',
    tone('fwhm: { of: [1 ps, 1000 fs] }, area: 1 pi'),
    '7:28 pulse.tones.0.fwhm.of.1: got 1000 fs again; needs each value once',
  ],
  [
    'list that is none',
    tone('fwhm: { of: 1 ps }, area: 1 pi'),
    '7:21 pulse.tones.0.fwhm.of: got 1 ps; needs a list of 1 to 1000 values',
  ],
  [
    'tie to a missing path',
    tone('fwhm: 5 ps, area: { same_as: tones.1.area }'),
    '7:38 pulse.tones.0.area.same_as: got the path pulse.tones.1.area; needs pulse.tones.0.area (the nearest path of this study)',
  ],
  [
    'tie to what cannot be free',
    tone('fwhm: { same_as: emitter.lifetime }, area: 1 pi'),
    `7:26 pulse.tones.0.fwhm.same_as: got the path emitter.lifetime; needs a path of this study among ${FREE}`,
  ],
  [
    'tie to itself',
    tone('fwhm: 5 ps, area: { same_as: tones.0.area }'),
    '7:38 pulse.tones.0.area.same_as: got a circle of ties (pulse.tones.0.area → pulse.tones.0.area); needs a path that does not lead back',
  ],
  [
    'tie to another dimension',
    tone('fwhm: 5 ps, area: { same_as: tones.0.fwhm }'),
    '7:38 pulse.tones.0.area.same_as: got pulse.tones.0.fwhm, a time; needs the path of a pulse area',
  ],
  [
    'tie to values out of bounds',
    tone('fwhm: { same_as: tones.0.delay }, area: 1 pi, delay: { from: -1 ps, to: 1 ps }'),
    '7:26 pulse.tones.0.fwhm.same_as: got pulse.tones.0.delay, whose values can lie outside; needs a path whose values are more than 0 ps',
  ],
  [
    'tie without a path',
    tone('fwhm: { same_as: 3 }, area: 1 pi'),
    '7:26 pulse.tones.0.fwhm.same_as: got 3; needs a path such as tones.0.fwhm',
  ],
  [
    'free value where none may be',
    emitter('dephasing: { from: 0 1/ns, to: 1 1/ns }'),
    `5:14 emitter.dephasing: got a mapping of from, to; needs a fixed value; only these can be free: ${FREE}`,
  ],
  ['duplicate key', after('title: a\ntitle: b'), '10:1 title: got the key title again; needs each key once'],
  [
    'misspelt key',
    MINIMAL.replace('fwhm', 'fwmh')
      .replace('5 ps', '5 ps, fwhm: 5 ps')
      .replace('- fwmh', '- { fwmh')
      .replace('\n      area: 1 pi', ', area: 1 pi }'),
    '7:9 pulse.tones.0.fwmh: got the unknown key fwmh; needs fwhm (the nearest key here)',
  ],
  [
    'unknown key near to none',
    emitter('colour: red'),
    '5:3 emitter.colour: got the unknown key colour; needs one of model, wavelength, lifetime, biexciton_lifetime, binding, splitting, dephasing, phonons, tuning',
  ],
  [
    'key of another place',
    after('rejection: 1e-6'),
    '9:1 rejection: got the unknown key rejection; needs one of pulsewright, title, emitter, pulse, collection, laser, goal, drift, search; rejection belongs at laser.rejection',
  ],
  ['key that is no name', after('7: 1'), '9:1: got the key 7; needs a name as key'],
  [
    'wrong type for a section',
    after('collection: 5'),
    '9:13 collection: got 5; needs a mapping with line, polarization, efficiency, filter',
  ],
  [
    'wrong type for tones',
    MINIMAL.replace('- fwhm', '  fwhm'),
    '7:7 pulse.tones: got a mapping of fwhm, area; needs a list of 1 to 16 (each begins with "- ")',
  ],
  [
    'no tones',
    MINIMAL.replace(/ {4}- [\s\S]*$/, '    []\n'),
    '7:5 pulse.tones: got an empty list; needs a list of 1 to 16 (each begins with "- ")',
  ],
  [
    'empty section',
    after('drift:'),
    '9:7 drift: got nothing; needs a mapping with area, width, detuning, filter_center, judge, quantile',
  ],
  [
    'missing key',
    MINIMAL.replace('  lifetime: 400 ps\n', ''),
    `2:1 emitter.lifetime: got nothing; needs ${TIME} (radiative lifetime of the exciton)`,
  ],
  [
    'missing section',
    MINIMAL.replace(/pulse:\n[\s\S]*$/, ''),
    '1:1 pulse: got nothing; needs a mapping with reference, tones (the excitation pulse)',
  ],
  [
    'missing version',
    MINIMAL.slice(MINIMAL.indexOf('\n') + 1),
    '1:1 pulsewright: got nothing; needs version of the study format',
  ],
  [
    'another version',
    MINIMAL.replace(': 1', ': 2'),
    '1:14 pulsewright: got format 2; needs format 1, the only one that this version reads',
  ],
  [
    'version that is none',
    MINIMAL.replace(': 1', ': one'),
    '1:14 pulsewright: got one; needs format 1, the only one that this version reads',
  ],
  [
    'unknown name',
    after('      shape: gausian'),
    '9:14 pulse.tones.0.shape: got gausian; needs one of gaussian, sech, square (nearest: gaussian)',
  ],
  [
    'unknown model',
    MINIMAL.replace('two-level', 'trion'),
    '3:10 emitter.model: got trion; needs one of two-level, cascade',
  ],
  [
    'long title',
    after(`title: ${'x'.repeat(201)}`),
    `9:8 title: got ${'x'.repeat(80)}…; needs one line of text, at most 200 characters`,
  ],
  [
    'h without a cascade',
    after('collection: { polarization: h }'),
    '9:29 collection.polarization: got h; needs one of all, crossed for model two-level',
  ],
  [
    'biexciton line without a cascade',
    after('collection: { line: biexciton }'),
    '9:21 collection.line: got biexciton; needs one of exciton for model two-level',
  ],
  [
    'binding without a cascade',
    emitter('binding: 3 meV'),
    '5:12 emitter.binding: got 3 meV; needs a model with a biexciton (cascade); two-level has none',
  ],
  [
    'splitting without a cascade',
    emitter('splitting: 0 ueV'),
    '5:14 emitter.splitting: got 0 ueV; needs a model with a biexciton (cascade); two-level has none',
  ],
  [
    'biexciton lifetime without a cascade',
    emitter('biexciton_lifetime: 200 ps'),
    '5:23 emitter.biexciton_lifetime: got 200 ps; needs a model with a biexciton (cascade); two-level has none',
  ],
  [
    'two-photon without a cascade',
    MINIMAL.replace('  tones', '  reference: two-photon\n  tones'),
    '6:14 pulse.reference: got two-photon; needs exciton for model two-level: it has no biexciton (cascade has)',
  ],
  [
    'cascade without binding',
    MINIMAL.replace('two-level', 'cascade'),
    '2:1 emitter.binding: got nothing; needs an energy in ueV or meV, not 0: model cascade has a biexciton',
  ],
  [
    'binding of zero',
    cascade('binding: 0 meV'),
    '5:12 emitter.binding: got 0 meV; needs any value but 0 meV',
  ],
  [
    'efficiency above 1',
    after('collection: { efficiency: 120 % }'),
    '9:27 collection.efficiency: got 120 %; needs more than 0 and at most 1',
  ],
  [
    'efficiency of zero',
    after('collection: { efficiency: 0 }'),
    '9:27 collection.efficiency: got 0; needs more than 0 and at most 1',
  ],
  [
    'brightness beyond efficiency',
    after('collection: { efficiency: 0.5 }\ngoal: { at_least: 0.6 }'),
    '10:19 goal.at_least: got 0.6; needs at most 0.5: brightness cannot exceed the efficiency 0.5',
  ],
  [
    'brightness beyond the polariser',
    after(
      'collection: { polarization: crossed, efficiency: 0.8 }\ngoal: { brightness: any, front: { to: 0.5 } }',
    ),
    '10:39 goal.front.to: got 0.5; needs at most 0.4: brightness cannot exceed the efficiency 0.8 × 1/2 of the crossed polariser',
  ],
  [
    'reversed front',
    after('goal: { front: { from: 0.5, to: 0.4 } }'),
    '9:9 goal.front: got levels from 0.5 to 0.4; needs from below to',
  ],
  [
    'a front of one point',
    after('goal: { front: { points: 1 } }'),
    '9:26 goal.front.points: got 1; needs a whole number from 2 to 1000',
  ],
  [
    'leakage without a pulse energy',
    after('laser: { rejection: 1e-6 }'),
    '9:21 laser.rejection: got 1e-6; needs laser.pi_pulse with energy and fwhm: leakage follows from the pulse energy',
  ],
  [
    'half a pi pulse',
    after('laser: { pi_pulse: { energy: 12 fJ } }'),
    `9:10 laser.pi_pulse.fwhm: got nothing; needs ${TIME} (its intensity full width at half maximum)`,
  ],
  [
    'drift of the width too wide',
    after('drift: { width: 16 % }'),
    '9:17 drift.width: got 16 %; needs at least 0 % and at most 15 %',
  ],
  [
    'drift judged on too small a share',
    after('drift: { area: 2 %, judge: quantile, quantile: 0.4 }'),
    '9:48 drift.quantile: got 0.4; needs at least 0.5 and at most 0.999',
  ],
  [
    'limit without a bound',
    after('goal: { limits: { pulse.duration_ps: {} } }'),
    '9:19 goal.limits.pulse.duration_ps: got an empty mapping; needs at_most, at_least or both',
  ],
  [
    'limit on the energy without a measured pulse',
    after('goal: { limits: { pulse.energy_fj: { at_most: 12 fJ } } }'),
    '9:19 goal.limits.pulse.energy_fj: got a limit; needs laser.pi_pulse with energy and fwhm: energies in fJ follow from it',
  ],
  [
    'limit on the Rabi frequency as an energy',
    after('goal: { limits: { pulse.peak_rabi_per_ps: { at_most: 2 meV } } }'),
    '9:54 goal.limits.pulse.peak_rabi_per_ps.at_most: got 2 meV (an energy); needs a Rabi frequency in 1/ps, rad/ps, 1/ns or rad/ns, such as 0.4 1/ps',
  ],
  [
    'third axis of energy without a measured pulse',
    after('goal: { third: { axis: energy } }'),
    '9:24 goal.third.axis: got energy; needs laser.pi_pulse with energy and fwhm: energies in fJ follow from it',
  ],
  [
    'third axis without a name',
    after('goal: { third: { slices: 3 } }'),
    '9:9 goal.third.axis: got nothing; needs one of energy, leakage, mean (energy: of the pulse, in fJ, minimised (needs laser.pi_pulse); leakage: leaked laser photons per pulse, minimised; mean: ⟨n⟩ of what is collected, maximised)',
  ],
  [
    'one slice',
    after('goal: { third: { axis: mean, slices: 1 } }'),
    '9:38 goal.third.slices: got 1; needs a whole number from 2 to 6',
  ],
  [
    'limit without its unit',
    after('goal: { limits: { pulse.duration_ps: { at_most: 12 } } }'),
    '9:49 goal.limits.pulse.duration_ps.at_most: got 12 (no unit); needs a time in fs, ps, ns or us, such as 5 ps',
  ],
  [
    'limit that nothing meets',
    after('goal: { limits: { collected.g2: { at_least: 0.2, at_most: 0.1 } } }'),
    '9:19 goal.limits.collected.g2: got at_least 0.2 and at_most 0.1; needs at_least not above at_most',
  ],
  [
    'limit of filtered light without a filter',
    after('goal: { limits: { filtered.g2: { at_most: 0.1 } } }'),
    '9:19 goal.limits.filtered.g2: got a limit; needs a study with collection.filter: without one there is no filtered light',
  ],
  [
    'limit of a misspelt figure',
    after('goal: { limits: { pulse.duration: { at_most: 1 ps } } }'),
    '9:19 goal.limits.pulse.duration: got the unknown key pulse.duration; needs pulse.duration_ps (the nearest key here)',
  ],
  [
    'drift without unit',
    after('drift: { area: 0.02 }'),
    '9:16 drift.area: got 0.02 (no unit); needs a percentage in %, such as 2 %',
  ],
  [
    'broken evaluations',
    after('search: { evaluations: 2.5 }'),
    '9:24 search.evaluations: got 2.5; needs a whole number from 1 to 1000000000',
  ],
  ['seed of zero', after('search: { seed: 0 }'), '9:17 search.seed: got 0; needs a whole number from 1 on'],
  ['seed as text', after('search: { seed: "7" }'), '9:17 search.seed: got 7; needs a whole number from 1 on'],
  [
    'unknown alias',
    MINIMAL.replace('5 ps', '*tau'),
    '7:13 pulse.tones.0.fwhm: got *tau; needs an anchor that stands before it',
  ],
  [
    'slope of zero',
    emitter('tuning: { slope: 0 ueV/mV, bias: 0.2 V, range: [0.1 V, 0.3 V] }'),
    '5:20 emitter.tuning.slope: got 0 ueV/mV; needs any value but 0 meV/mV',
  ],
  [
    'slope of another dimension',
    emitter('tuning: { slope: 5 ueV, bias: 0.2 V, range: [0.1 V, 0.3 V] }'),
    '5:20 emitter.tuning.slope: got 5 ueV (an energy); needs a Stark slope in ueV/mV, meV/V, ueV/V or meV/mV, such as 5 ueV/mV',
  ],
  [
    'reversed plateau',
    emitter('tuning: { slope: 5 ueV/mV, bias: 0.2 V, range: [0.3 V, 0.1 V] }'),
    '5:50 emitter.tuning.range: got 0.3 V before 0.1 V; needs the lower value first and the higher one second',
  ],
  [
    'plateau with one end',
    emitter('tuning: { slope: 5 ueV/mV, bias: 0.2 V, range: [0.3 V] }'),
    '5:50 emitter.tuning.range: got a list of 1; needs two values, [lowest, highest], each a voltage in mV or V, such as 200 mV',
  ],
  [
    'plateau that is no voltage',
    emitter('tuning: { slope: 5 ueV/mV, bias: 0.2 V, range: [0.1 V, 3 K] }'),
    '5:58 emitter.tuning.range.1: got 3 K (a temperature); needs a voltage in mV or V, such as 200 mV',
  ],
  [
    'nominal bias off the plateau',
    emitter('tuning: { slope: 5 ueV/mV, bias: 0.4 V, range: [0.1 V, 0.3 V] }'),
    '5:36 emitter.tuning.bias: got 0.4 V; needs a voltage inside emitter.tuning.range, 100 mV to 300 mV',
  ],
  [
    'plateau too wide for the slope',
    emitter('tuning: { slope: 1e308 meV/mV, bias: 0.2 V, range: [0.19 V, 0.21 V] }'),
    '5:47 emitter.tuning.range: got 190 mV to 210 mV at 1e308 meV/mV; needs a plateau whose detunings are finite and not all the same',
  ],
  [
    'negative temperature',
    emitter('phonons: { coupling: 0.03 ps^2, cutoff: 2 1/ps, temperature: -1 K }'),
    '5:64 emitter.phonons.temperature: got -1 K; needs at least 0 K',
  ],
];

describe('each fault stands at its place and says what is allowed', () => {
  it.each(single)('%s', (_, text, message) => {
    expect(printed(text)).toEqual([`study.yaml:${message}`]);
  });

  it('allows a mean of more photons than the efficiency', () => {
    expect(
      printed(after('collection: { efficiency: 0.5 }\ngoal: { brightness: mean, at_least: 0.9 }')),
    ).toEqual([]);
  });

  it('knows that a crossed cascade loses no further half', () => {
    const text = `${cascade('binding: 3 meV')}collection: { polarization: crossed }\ngoal: { at_least: 0.9 }\n`;
    expect(printed(text)).toEqual([]);
  });
});

describe('all faults at once', () => {
  it('in the order of the file', () => {
    const text = COMPLETE.replace('925.3 nm', '925.3')
      .replace('2.4 meV', '2.4 ps')
      .replace('temperature', 'temprature')
      .replace('2 ps, to: 40 ps', '40 ps, to: 2 ps')
      .replace('tones.0.fwhm }', 'tones.7.fwhm }')
      .replace('65 %', '165 %')
      .replace('energy: 12 fJ', 'energy: -12 fJ')
      .replace('points: 9', 'points: nine')
      .replace('seed: 7', 'seed: 7.5');
    const faults = faultsOf(text);
    expect(faults.map((f) => f.path)).toEqual([
      'emitter.wavelength',
      'emitter.binding',
      'emitter.phonons.temperature',
      'emitter.phonons.temprature',
      'pulse.tones.0.fwhm',
      'pulse.tones.1.fwhm.same_as',
      'collection.efficiency',
      'laser.pi_pulse.energy',
      'goal.front.points',
      'search.seed',
    ]);
    const lines = faults.map((f) => f.line);
    expect([...lines].sort((a, b) => a - b)).toEqual(lines);
  });

  it('reports every link of a circle of ties', () => {
    const text = `${tone('fwhm: { same_as: tones.1.fwhm }, area: 1 pi')}    - { fwhm: { same_as: tones.0.fwhm }, area: 1 pi }\n`;
    expect(faultsOf(text).map((f) => [f.line, f.column, f.found])).toEqual([
      [7, 26, 'a circle of ties (pulse.tones.0.fwhm → pulse.tones.1.fwhm → pulse.tones.0.fwhm)'],
      [8, 26, 'a circle of ties (pulse.tones.1.fwhm → pulse.tones.0.fwhm → pulse.tones.1.fwhm)'],
    ]);
  });
});
