import { exactQuantity } from '../../../core/index.js';
import type { Study } from '../contract.js';
import { locate } from '../source/placed.js';
import type { ReadContext } from './context.js';

/** What a valid study should tell its author. */
export function addRemarks(study: Study, context: ReadContext): void {
  const say = (path: string, text: string) => context.remark(locate(context.root, path).at, path, text);
  const { emitter, pulse, collection, laser } = study.design;
  const leaks = laser !== null && laser.piPulse !== null && laser.rejection > 0;
  if (leaks && !locate(context.root, 'emitter.wavelength').exact) {
    say(
      'emitter.wavelength',
      `not given: photon energies are those of ${exactQuantity(emitter.wavelength, 'length')}`,
    );
  }
  if (collection.polarization === 'crossed') crossedTones(study, say);
  if (emitter.phonons?.coupling === 0) say('emitter.phonons.coupling', 'zero: the phonons have no effect');
  if (laser !== null && laser.piPulse !== null && laser.rejection === 0) {
    say('laser.rejection', 'zero or not given: no laser light leaks into the collection');
  }
  if (pulse.tones.every((tone) => tone.area === 0) && study.parameters.length === 0) {
    say('pulse.tones', 'every area is zero: nothing is excited');
  }
}

function crossedTones(study: Study, say: (path: string, text: string) => void): void {
  const { tones } = study.design.pulse;
  const varies = (path: string) =>
    study.parameters.some((p) => p.path === path) || study.ties.some((tie) => tie.path === path);
  const rootOf = (path: string): string => {
    const tie = study.ties.find((t) => t.path === path);
    return tie ? rootOf(tie.sameAs) : path;
  };
  const first = 'pulse.tones.0.polarization';
  tones.forEach((tone, i) => {
    const path = `pulse.tones.${i}.polarization`;
    if (i === 0 || rootOf(path) === rootOf(first)) return;
    const differs = tone.polarization !== tones[0].polarization || varies(path) || varies(first);
    if (differs)
      say(path, 'not that of the first tone: this light passes the crossed polariser without rejection');
  });
}
