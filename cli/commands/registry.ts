import type { CommandEntry } from './contract.js';

/** Every command, in the order of the work. To add one: a file beside these and an entry here. */
export const commands: readonly CommandEntry[] = [
  {
    name: 'init',
    positionals: '[dir]',
    summary: 'write a commented starter study and its JSON Schema',
    load: async () => (await import('./init.js')).init,
  },
  {
    name: 'check',
    positionals: '<study>',
    summary: 'list every fault of a study, or every quantity that follows from it',
    load: async () => (await import('./check.js')).check,
  },
  {
    name: 'evaluate',
    positionals: '<study>',
    summary: 'photon statistics of one fixed design',
    load: async () => (await import('./evaluate.js')).evaluateCommand,
  },
  {
    name: 'scan',
    positionals: '<study>',
    summary: 'figures against one or two parameters, as CSV and picture',
    load: async () => (await import('./scan.js')).scan,
  },
  {
    name: 'optimize',
    positionals: '<study>',
    summary: 'search the least multiphoton light at every brightness',
    load: async () => (await import('./optimize.js')).optimize,
  },
  {
    name: 'verify',
    positionals: '<dir>',
    summary: 'recompute every design of a finished run independently; say which points hold',
    load: async () => (await import('./verify.js')).verify,
  },
  {
    name: 'compare',
    positionals: '<dir..>',
    summary: 'fronts of finished runs in one picture and one table',
    load: async () => (await import('./compare.js')).compare,
  },
  {
    name: 'tolerance',
    positionals: '<study>',
    summary: 'what drift does to a design, and the largest drift that still meets the goal',
    load: async () => (await import('./tolerance.js')).tolerance,
  },
];
