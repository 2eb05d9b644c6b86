import { leakedPhotons, pulseFilter } from './collection/leakage.js';
import { FEWEST_MOMENTS, judgeSeries, momentsOf } from './collection/series.js';
import type { Design } from './design.js';
import { type DriftNode, driftedDesign } from './drift/nodes.js';
import {
  type CountRequest,
  type CountResult,
  countPhotons,
  type Effort,
  PropagationError,
} from './kernels/count.js';
import type { PhononCount } from './phonons/contract.js';
import type { PhononPlan } from './phonons/plan.js';
import { pulseFigures } from './pulse/figures.js';
import { assembleSample, type SampleRun } from './sample.js';
import { emittedRequest, planOf, rotatingFilter, type Situation, situation, survival } from './situation.js';
import { HBAR } from './units/constants.js';
import { ALL_FIGURES, type Wanted, type WantedFigures } from './wanted.js';

/** A design at one node of its drift. */
export interface NodeTask {
  readonly nominal: Design;
  readonly node: DriftNode;
  /** Everything when left out. */
  readonly wanted?: WantedFigures;
}

/** A run that worked; throws what hindered it otherwise. */
export function orThrow<T>(run: T | PropagationError): T {
  if (run instanceof PropagationError) throw run;
  return run;
}

/**
 * Figures of many designs and nodes, counted together: the same as one by one.
 * @returns one answer per task; an error where the propagation cannot be carried out
 */
export function sampleAll(tasks: readonly NodeTask[], effort: Effort): (SampleRun | PropagationError)[] {
  const scenes = new SceneCache();
  const places = tasks.map((task) => attempt(() => place(task, effort, scenes)));
  const counts = countAll(places);
  return places.map((at, i) => {
    const count = counts[i];
    if (at instanceof PropagationError) return at;
    return count instanceof PropagationError ? count : finish(at, count);
  });
}

const attempt = <T>(work: () => T): T | PropagationError => {
  try {
    return work();
  } catch (error) {
    if (error instanceof PropagationError) return error;
    throw error;
  }
};

/** A drifted design in the terms of the propagator, with what does not depend on the emitter's shift. */
class Scene {
  readonly where: Situation;
  #leakage: number | null = null;
  #pulse: SampleRun['sample']['pulse'] | null = null;

  constructor(readonly design: Design) {
    this.where = situation(design);
  }

  leakage(): number {
    const { line, reference } = this.where;
    this.#leakage ??= leakedPhotons(this.design, pulseFilter(this.design, line, reference));
    return this.#leakage;
  }

  pulse(wanted: Wanted): SampleRun['sample']['pulse'] {
    const { pulse, laser } = this.design;
    this.#pulse ??= pulseFigures(pulse, this.where.drive, laser?.piPulse ?? null, wanted.pulse);
    return this.#pulse;
  }
}

/** Nodes that differ in the emitter's shift alone share their scene. */
class SceneCache {
  readonly #scenes = new Map<Design, Map<string, Scene>>();

  get({ nominal, node }: NodeTask): Scene {
    if (nominal.drift === null) return new Scene(driftedDesign(nominal, node));
    let own = this.#scenes.get(nominal);
    if (!own) {
      own = new Map();
      this.#scenes.set(nominal, own);
    }
    const key = `${node.area} ${node.width} ${node.center ?? 0}`;
    let scene = own.get(key);
    if (!scene) {
      scene = new Scene(driftedDesign(nominal, node));
      own.set(key, scene);
    }
    return scene;
  }
}

/** A task made ready to be counted. */
interface Place {
  readonly scene: Scene;
  /** Null without phonons. */
  readonly plan: PhononPlan | null;
  readonly effort: Effort;
  /** Without the filter. */
  readonly base: CountRequest;
  readonly wanted: Wanted;
}

function place(task: NodeTask, wantedEffort: Effort, scenes: SceneCache): Place {
  const scene = scenes.get(task);
  const { design, where } = scene;
  const shift = task.node.shift / HBAR;
  const plan = design.emitter.phonons === null ? null : planOf(design, where, shift, wantedEffort);
  // A hierarchy settles to 1e-3: a bound on the moment series far below that would only cost operators.
  const effort: Effort = plan?.method === 'exact' ? { ...wantedEffort, series: 'estimate' } : wantedEffort;
  const path = {
    filtered: design.collection.filter !== null,
    thinned: survival(design, where.scheme) < 1,
  };
  const wanted = (task.wanted ?? ALL_FIGURES).of(path);
  return { scene, plan, effort, base: emittedRequest(design, where, shift, effort), wanted };
}

interface Count {
  readonly result: PhononCount;
  readonly moments: readonly number[];
  /** Relative error that the moment series may leave. */
  readonly seriesError: number;
}

type Failed = PropagationError;

/** Counts every place; behind a filter again with more moments where their series is too short. */
function countAll(places: readonly (Place | Failed)[]): (Count | Failed)[] {
  const done = new Array<Count | Failed>(places.length);
  let open: { readonly i: number; readonly at: Place; readonly order: number }[] = [];
  places.forEach((at, i) => {
    if (at instanceof PropagationError) done[i] = at;
    else open.push({ i, at, order: firstOrder(at) });
  });
  while (open.length > 0) {
    const results = countPlaces(
      open.map(({ at }) => at.plan),
      open.map(({ at, order }) => requestOf(at, order)),
    );
    const again: typeof open = [];
    open.forEach(({ i, at, order }, k) => {
      const result = results[k];
      if (result instanceof PropagationError) {
        done[i] = result;
        return;
      }
      const moments = order > 0 ? momentsOf(result.values, order) : NO_MOMENTS;
      const settled = order < FEWEST_MOMENTS.estimate;
      const series = settled ? SETTLED : judgeSeries(moments, at.effort.series);
      if (series.kind === 'more') again.push({ i, at, order: series.order });
      else done[i] = { result, moments, seriesError: series.error };
    });
    open = again;
  }
  return done;
}

const NO_MOMENTS: readonly number[] = [];
const SETTLED = { kind: 'enough', error: 0 } as const;

/** Number of moments to begin with; 0 without a filter. ⟨n⟩ and g⁽²⁾ are exact with two. */
function firstOrder({ scene, effort, wanted }: Place): number {
  if (scene.design.collection.filter === null) return 0;
  return wanted.series ? FEWEST_MOMENTS[effort.series] : 2;
}

function requestOf({ scene, base, wanted }: Place, order: number): CountRequest {
  const { filter } = scene.design.collection;
  if (filter === null) return wanted.emitted ? { ...base, wanted: wanted.emitted } : base;
  const request = { ...base, filter: { ...rotatingFilter(filter, scene.where), order } };
  if (wanted.emitted === null) return request;
  const moments = Array.from({ length: order }, (_, k) => `m${k + 1}`);
  return { ...request, wanted: [...moments, ...wanted.emitted] };
}

/** One answer per request. */
function countPlaces(
  plans: readonly (PhononPlan | null)[],
  requests: readonly CountRequest[],
): (PhononCount | Failed)[] {
  return plans.map((plan, k) => {
    const request = requests[k];
    return plan === null ? bare(attempt(() => countPhotons(request))) : attempt(() => plan.count(request));
  });
}

/** A count without phonons. */
function bare(result: CountResult | Failed): PhononCount | Failed {
  if (result instanceof PropagationError) return result;
  const { values, populations, steps, localErrors } = result;
  return { values, populations, steps, localErrors, flags: NOTHING, remarks: NOTHING, error: 0 };
}

const NOTHING: readonly string[] = [];

function finish({ scene, plan, effort, wanted }: Place, count: Count): SampleRun {
  const { result, moments, seriesError } = count;
  const { design, where } = scene;
  const leakage = wanted.leakage ? scene.leakage() : 0;
  const counted = { values: result.values, populations: result.populations, moments, leakage };
  return {
    sample: assembleSample(counted, scene.pulse(wanted), design, where, effort.series),
    phonons: { method: plan?.method ?? 'none', flags: result.flags },
    tower: result.tower,
    remarks: plan ? [...plan.remarks, ...result.remarks] : NOTHING,
    steps: result.steps,
    // A refined mesh no longer has the errors that were measured while it was built.
    error: Math.max(
      effort.parts > 1 || effort.checked ? 0 : result.localErrors * 1000,
      where.drive.error,
      seriesError,
      result.error,
    ),
  };
}
