import { exactQuantity } from '../../../core/index.js';
import { locate } from '../source/placed.js';
import { plateauDetunings } from '../tuning.js';
import type { Field, FieldState, ReadContext } from './context.js';
import type { RawStudy } from './rules.js';

const TUNED = 'pulse.tones.0.detuning';

interface Plateau {
  readonly from: number;
  readonly to: number;
}

const inMeV = (value: number): string => exactQuantity(value, 'energy');
const described = ({ from, to }: Plateau): string =>
  `${inMeV(from)} to ${inMeV(to)}: what the bias range of emitter.tuning reaches`;

/**
 * Holds the detuning of the first tone to what the bias can make: a fixed one outside is a fault, a free one is
 * narrowed with a remark. A tie is followed to where the value stands.
 */
export function keepOnPlateau(raw: RawStudy, context: ReadContext): void {
  const tuning = raw.emitter?.tuning;
  const field = standing(context);
  if (!tuning || !field) return;
  const { slope, bias, range } = tuning;
  if (slope === undefined || bias === undefined || range === undefined) return;
  // A bias off its own range has its fault already, and says nothing about detunings.
  if (bias < range.from || bias > range.to) return;
  const plateau = plateauDetunings({ slope, bias, range });
  if (!(plateau.from < plateau.to) || !Number.isFinite(plateau.to - plateau.from)) {
    const found = `${inVolts(range.from)} to ${inVolts(range.to)} at ${exactQuantity(slope, 'starkSlope')}`;
    const path = 'emitter.tuning.range';
    const wanted = 'a plateau whose detunings are finite and not all the same';
    context.fault(locate(context.root, path).at, path, found, wanted);
    return;
  }
  const state = kept(field, plateau, context);
  if (state === null) return;
  context.fields.set(field.path, { ...field, state });
  if (state.kind === 'range') field.assign(state.from);
  if (state.kind === 'list') field.assign(state.values[0]);
}

const inVolts = (value: number): string => exactQuantity(value, 'voltage');

/** The field from which the first tone's detuning comes; undefined where a tie leads nowhere or in a circle. */
function standing(context: ReadContext): Field | undefined {
  let field = context.fields.get(TUNED);
  for (let steps = context.fields.size; field?.state.kind === 'tie' && steps >= 0; steps--) {
    field = context.fields.get(field.state.target);
  }
  return field?.leaf.rule.kind === 'quantity' && field.leaf.rule.dimension === 'energy' ? field : undefined;
}

/** What is left of a state on the plateau; null when nothing is to change, or after a fault. */
function kept({ path, at, state }: Field, plateau: Plateau, context: ReadContext): FieldState | null {
  const on = (value: number) => value >= plateau.from && value <= plateau.to;
  if (state.kind === 'fixed') {
    if (!on(state.value)) context.fault(at, path, inMeV(state.value), described(plateau));
    return null;
  }
  if (state.kind === 'range') {
    const [from, to] = [Math.max(state.from, plateau.from), Math.min(state.to, plateau.to)];
    if (!(from < to)) {
      context.fault(
        at,
        path,
        `${inMeV(state.from)} to ${inMeV(state.to)}`,
        `a part of ${described(plateau)}`,
      );
      return null;
    }
    if (from === state.from && to === state.to) return null;
    context.remark(at, path, `narrowed to ${described({ from, to })}`);
    return { ...state, from, to };
  }
  if (state.kind !== 'list') return null;
  const values = state.values.filter(on);
  const dropped = state.values.filter((value) => !on(value)).map(inMeV);
  if (values.length === 0) {
    context.fault(at, path, dropped.join(', '), `a value from ${described(plateau)}`);
    return null;
  }
  if (dropped.length === 0) return null;
  context.remark(at, path, `without ${dropped.join(', ')}: allowed are ${described(plateau)}`);
  return { kind: 'list', values };
}
