import { addEmittedCounting, addThinnedCounting } from '../counting/emitted.js';
import { addFilteredMoments } from '../counting/filtered.js';
import { type Hierarchy, HierarchyBuilder } from '../counting/hierarchy.js';
import type { Scheme } from '../emitter/contract.js';
import { combine, type Operator, zero } from '../emitter/operators.js';
import type { CountRequest } from '../kernels/count.js';

/** What of the emitted light the filter meets as a line, and how much of the rest it lets through. */
export interface LineShare {
  /** ⟨B⟩: amplitude of the zero-phonon line's dipole. */
  readonly amplitude: number;
  /** Transmission of the phonon sideband, T_sb. */
  readonly sideband: number;
}

/** The blocks that a request asks for. */
export function requestedHierarchy(request: CountRequest, share: LineShare): Hierarchy {
  const { dipoles, thinning, filter } = request;
  const builder = new HierarchyBuilder();
  addEmittedCounting(builder, dipoles);
  if (thinning !== null) addThinnedCounting(builder, dipoles, thinning);
  if (filter) {
    const line = dipoles.map((c) => combine(c, share.amplitude, 0, zero(c.n), 0, 0));
    const aside: readonly Operator[] = share.sideband > 0 ? dipoles : [];
    addFilteredMoments(builder, line, filter, filter.order, { dipoles: aside, rate: share.sideband });
  }
  return builder.build();
}

/** A scheme whose levels carry the relaxation energy S²Δ_p (1/ps), so that the bath's own shift is undone. */
export function withRelaxationEnergy(scheme: Scheme, shift: number): Scheme {
  return {
    ...scheme,
    levels: scheme.levels.map((l) => ({ ...l, offset: l.offset + l.excitons * l.excitons * shift })),
  };
}
