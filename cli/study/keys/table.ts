import { emitterModels, pulseShapes } from '../../../core/index.js';
import { globalMethods, localMethods } from '../../../optimizers/index.js';
import {
  biexcitonOnly,
  choice,
  integer,
  interval,
  type Leaf,
  type List,
  optionalQuantity,
  optionalSection,
  quantity,
  section,
} from './kinds.js';
import { limits } from './limits.js';

export const FORMAT_VERSION = 1;

const version: Leaf<number> = {
  kind: 'leaf',
  rule: { kind: 'version', version: FORMAT_VERSION },
  presence: { kind: 'required' },
  help: 'version of the study format',
};
const title: Leaf<string> = {
  kind: 'leaf',
  rule: { kind: 'text', longest: 200 },
  presence: { kind: 'value', value: '' },
  help: 'one line that names the study',
};

const positive = { bounds: { above: 0 } } as const;
const notNegative = { bounds: { from: 0 } } as const;

const emitter = section('the quantum dot', 'required', {
  model: choice(
    'level scheme',
    emitterModels.map((m) => m.name),
    null,
  ),
  wavelength: quantity('length', 'vacuum wavelength of the exciton line; used for photon energies', {
    ...positive,
    default: '930 nm',
  }),
  lifetime: quantity('time', 'radiative lifetime of the exciton', positive),
  biexciton_lifetime: biexcitonOnly(
    optionalQuantity(
      'time',
      'radiative lifetime of the biexciton; half that of the exciton unless given',
      positive,
    ),
  ),
  binding: biexcitonOnly(
    optionalQuantity(
      'energy',
      'biexciton binding energy, positive when its line lies below the exciton line; required',
      {
        bounds: { not: 0 },
      },
    ),
  ),
  splitting: biexcitonOnly(quantity('energy', 'fine-structure splitting, h above v', { default: '0 ueV' })),
  dephasing: quantity('rate', 'pure dephasing rate of the excited levels', {
    ...notNegative,
    default: '0 1/ns',
  }),
  phonons: optionalSection('longitudinal-acoustic phonon bath; leave out for none', {
    coupling: quantity('phononCoupling', 'coupling strength A of J(ω) = A ω³ exp(−ω²/ω_c²)', notNegative),
    cutoff: quantity('rate', 'cutoff ω_c', positive),
    temperature: quantity('temperature', 'temperature of the bath', notNegative),
    method: choice('how the bath is treated', ['auto', 'polaron', 'weak-coupling', 'exact'], 'auto'),
  }),
  tuning: optionalSection(
    'linear Stark shift: with the laser left where the first tone has no detuning at `bias`, its detuning δ is set by V = bias − δ/slope; leave out for none',
    {
      slope: quantity(
        'starkSlope',
        'shift of the line per voltage: line(V) = line(bias) + slope·(V − bias)',
        {
          bounds: { not: 0 },
        },
      ),
      bias: quantity('voltage', 'voltage at which the line is where the study has it'),
      range: interval('voltage', 'plateau on which the dot keeps its charge: [lowest, highest]'),
    },
  ),
});

const tone = section('one colour of the pulse', 'empty', {
  shape: choice('envelope of the transform-limited pulse', Object.keys(pulseShapes), 'gaussian'),
  fwhm: quantity('time', 'intensity full width at half maximum, transform-limited', {
    ...positive,
    free: true,
  }),
  area: quantity('area', 'pulse area before dispersion', { ...notNegative, free: true }),
  detuning: quantity('energy', 'laser minus reference', { default: '0 meV', free: true }),
  gdd: quantity('gdd', 'group-delay dispersion; positive delays the high frequencies', {
    default: '0 ps^2',
    free: true,
  }),
  tod: quantity('tod', 'third-order dispersion', { default: '0 ps^3', free: true }),
  delay: quantity('time', 'delay of the envelope', { default: '0 ps', free: true }),
  phase: quantity('angle', 'phase of the carrier', { default: '0 deg', free: true }),
  polarization: quantity('angle', 'linear polarisation, from the h axis', { default: '0 deg', free: true }),
});

const tones: List<typeof tone> = { kind: 'list', item: tone, longest: 16, help: 'the colours of the pulse' };

const pulse = section('the excitation pulse', 'required', {
  reference: choice('what detunings count from', ['exciton', 'two-photon'], 'exciton'),
  tones,
});

const collection = section('the path of the photons', 'empty', {
  line: choice('spectral line that is collected', ['exciton', 'biexciton'], 'exciton'),
  polarization: choice('polarisation that is collected', ['all', 'crossed', 'h', 'v'], 'all'),
  efficiency: quantity('fraction', 'everything linear from emitter to where brightness is quoted', {
    bounds: { above: 0, to: 1 },
    default: '1',
  }),
  filter: optionalSection('Lorentzian filter centred on the line; leave out for none', {
    fwhm: quantity('frequency', 'full width at half maximum of the intensity transmission', {
      ...positive,
      free: true,
    }),
    center: quantity('frequency', 'centre above the collected line', { default: '0 GHz', free: true }),
  }),
});

const laser = optionalSection('the laser, for leakage; leave out for none', {
  repetition: optionalQuantity('repetition', 'repetition rate', positive),
  pi_pulse: optionalSection('measured resonant transform-limited Gaussian π pulse', {
    energy: quantity('pulseEnergy', 'energy of that pulse at the emitter', positive),
    fwhm: quantity('time', 'its intensity full width at half maximum', positive),
  }),
  rejection: quantity('fraction', 'laser intensity reaching the collection, over the incident one', {
    bounds: { from: 0, to: 1 },
    default: '0',
  }),
});

/** More lines than this cannot be told apart in a picture. */
const MOST_SLICES = 6;

const goal = section('what is sought', 'empty', {
  impurity: choice('minimised, of what is collected per pulse', ['multiphoton', 'g2'], 'multiphoton'),
  brightness: choice('maximised, of the signal per pulse', ['single', 'any', 'mean'], 'single'),
  at_least: optionalQuantity('fraction', 'brightness at which the best design is reported', positive),
  front: section('brightness levels of the front', 'empty', {
    from: optionalQuantity('fraction', 'lowest level; the reachable range unless given', positive),
    to: optionalQuantity('fraction', 'highest level; the reachable range unless given', positive),
    points: integer('number of levels', 2, 1000, 25),
  }),
  third: optionalSection('third axis of the front, shown as slices; leave out for none', {
    axis: choice(
      'energy: of the pulse, in fJ, minimised (needs laser.pi_pulse); leakage: leaked laser photons per pulse, minimised; mean: ⟨n⟩ of what is collected, maximised',
      ['energy', 'leakage', 'mean'],
      null,
    ),
    slices: integer('number of fronts, each within a bound of the third axis', 2, MOST_SLICES, 4),
  }),
  limits,
});

const drift = optionalSection('rms of slow Gaussian drifts; the goal is then the mean over them', {
  area: quantity('percent', 'of every area in common', { ...notNegative, default: '0 %' }),
  width: quantity('percent', 'of every width in common', { bounds: { from: 0, to: 0.15 }, default: '0 %' }),
  detuning: quantity('energy', 'of the emitter line', { ...notNegative, default: '0 ueV' }),
  filter_center: quantity('frequency', "of the filter's centre", { ...notNegative, default: '0 GHz' }),
  judge: choice(
    'what a goal is judged on: means over the drift, or a quantile',
    ['mean', 'quantile'],
    'mean',
  ),
  quantile: quantity(
    'fraction',
    'with judge: quantile, the share of the drift that brightness and impurity hold for',
    {
      bounds: { from: 0.5, to: 0.999 },
      default: '0.9',
    },
  ),
});

const search = section('how long and from where to search', 'empty', {
  evaluations: integer('hard cap on the number of objective values', 1, 1_000_000_000, 20_000),
  seed: integer('seed of every random choice', 1, Number.MAX_SAFE_INTEGER, 1),
  method: choice(
    'auto: the default strategy; else one method, for many objectives as it is, else level by level',
    ['auto', ...localMethods.keys(), ...globalMethods.keys()],
    'auto',
  ),
});

/** Every key of a study file: the reader, the writer, the JSON Schema, the docs and the nearest-key search use this. */
export const studyKeys = section('a study', 'required', {
  pulsewright: version,
  title,
  emitter,
  pulse,
  collection,
  laser,
  goal,
  drift,
  search,
});
