import { dimensionInfo, quoteFound } from '../../../core/index.js';
import type { FreeParameter, Tie } from '../../../optimizers/index.js';
import { describeBounds, withinBounds } from '../keys/kinds.js';
import { freePlaces } from '../keys/paths.js';
import { nearestName } from '../nearest.js';
import { placedPaths } from '../source/placed.js';
import type { Field, FieldState, ReadContext } from './context.js';

type TieField = Field & { readonly state: Extract<FieldState, { kind: 'tie' }> };

/** Free parameters and ties in the order of the file; gives every tied field its value. */
export function resolveFields(context: ReadContext): { parameters: FreeParameter[]; ties: Tie[] } {
  const parameters: FreeParameter[] = [];
  const ties: Tie[] = [];
  const order = new Map([...placedPaths(context.root)].map((path, i) => [path, i]));
  const fields = [...context.fields.values()].sort(
    (a, b) => (order.get(a.path) ?? 0) - (order.get(b.path) ?? 0),
  );
  for (const field of fields) {
    const { path, state } = field;
    if (state.kind === 'range') {
      parameters.push({ kind: 'range', path, from: state.from, to: state.to, scale: state.scale });
    } else if (state.kind === 'list') parameters.push({ kind: 'list', path, values: state.values });
    else if (state.kind === 'tie') {
      const tie = resolveTie(field as TieField, context);
      if (tie) ties.push(tie);
    }
  }
  return { parameters, ties };
}

function resolveTie(field: TieField, context: ReadContext): Tie | null {
  const { path, state } = field;
  const fault = (found: string, wanted: string) => {
    context.fault(state.at, `${path}.same_as`, found, wanted);
    return null;
  };
  const seen = [path];
  let at: Field = field;
  while (at.state.kind === 'tie') {
    const { target } = at.state;
    const next = context.fields.get(target);
    // A chain with a missing link further on has its fault there.
    if (!next)
      return at === field ? fault(`the path ${quoteFound(target)}`, describeTargets(target, context)) : null;
    if (seen.includes(target)) {
      return fault(`a circle of ties (${[...seen, target].join(' → ')})`, 'a path that does not lead back');
    }
    seen.push(target);
    at = next;
  }
  const direct = context.fields.get(state.target) as Field;
  const [mine, theirs] = [ruleOf(field), ruleOf(direct)];
  if (mine.dimension !== theirs.dimension) {
    const [have, need] = [dimensionInfo(theirs.dimension).name, dimensionInfo(mine.dimension).name];
    return fault(`${state.target}, ${have}`, `the path of ${need}`);
  }
  const outside = valuesOf(at.state).some((value) => !withinBounds(value, mine.bounds));
  if (outside) {
    const wanted = `a path whose values are ${describeBounds(mine.bounds, mine.dimension)}`;
    return fault(`${state.target}, whose values can lie outside`, wanted);
  }
  const start = valuesOf(at.state)[0];
  if (start === undefined) return null;
  field.assign(start);
  return { path, sameAs: state.target };
}

function valuesOf(state: FieldState): readonly number[] {
  if (state.kind === 'fixed') return [state.value];
  if (state.kind === 'range') return [state.from, state.to];
  return state.kind === 'list' ? state.values : [];
}

function ruleOf(field: Field) {
  const { rule } = field.leaf;
  if (rule.kind !== 'quantity') throw new Error(`${field.path} is no quantity`);
  return rule;
}

function describeTargets(target: string, context: ReadContext): string {
  const near = nearestName(target, [...context.fields.keys()]);
  const place = `a path of this study among ${freePlaces()}`;
  return near === null ? place : `${near} (the nearest path of this study)`;
}
