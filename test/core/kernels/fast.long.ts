/**
 * The fast kernels over the whole valid range: every design within the promise of a finer reference, or declined.
 * Prints the shares and the worst case per kind; fails when a design is out. Arguments: designs per kind, seed.
 */
import { agreement } from './fast-designs.js';

const count = Number(process.argv[2] ?? 1250);
const seed = Number(process.argv[3] ?? 1);
let wrong = 0;
for (const model of ['two-level', 'cascade'] as const) {
  for (const filtered of [false, true]) {
    const outcome = agreement(model, filtered, count, seed, {});
    wrong += outcome.wrong.length;
    console.log(`${model} ${filtered ? 'filtered' : 'emitted'}: ${JSON.stringify(outcome)}`);
  }
}
process.exitCode = wrong > 0 ? 1 : 0;
