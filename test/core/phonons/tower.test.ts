import { execFileSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import { HierarchyBuilder } from '../../../core/counting/hierarchy.js';
import { buildGenerator } from '../../../core/emitter/generator.js';
import { LinearSystem } from '../../../core/kernels/linear-system.js';
import { propagate, uniformMesh } from '../../../core/kernels/mesh.js';
import { relaxationShift } from '../../../core/phonons/bath.js';
import { correlationFit } from '../../../core/phonons/correlations.js';
import { requestedHierarchy, withRelaxationEnergy } from '../../../core/phonons/counting.js';
import { exponentialFlow, propagateExponentially } from '../../../core/phonons/exponential-step.js';
import { countWithHierarchy } from '../../../core/phonons/hierarchy-count.js';
import { buildTower } from '../../../core/phonons/tower.js';
import { plainKernel, towerKernel } from '../../../core/phonons/tower-kernel.js';
import { towerLinks } from '../../../core/phonons/tower-links.js';
import { TowerSystem } from '../../../core/phonons/tower-system.js';
import type { Drive } from '../../../core/pulse/drive.js';
import { cascadeRequest, phonons, twoLevelRequest } from './support.js';

const FILTER = { kappa: 0.2, center: 0.05, order: 3 };

function silentlyLonger(drive: Drive, time: number): Drive {
  const last = drive.breakpoints.length - 1;
  return {
    ...drive,
    breakpoints: Float64Array.of(...drive.breakpoints, drive.breakpoints[last] + time),
    sample(t, segment, out) {
      if (segment < last) drive.sample(t, segment, out);
      else out.fill(0);
    },
  };
}

describe('compiled loops of the hierarchy', () => {
  it.each([
    ['two-level', twoLevelRequest([{}], 500, { filter: FILTER })],
    ['cascade', cascadeRequest()],
  ])('%s: the same bits as the plain ones', (_, request) => {
    const scheme = withRelaxationEnergy(request.scheme, relaxationShift(phonons(4)));
    const tower = buildTower(correlationFit(phonons(4), 'bath', 5).poles, 2, 2, 0);
    const links = towerLinks(scheme, tower);
    const hierarchy = requestedHierarchy(request, { amplitude: 1, sideband: 0 });
    const run = (kernelFor: typeof towerKernel): Float64Array => {
      const system = new TowerSystem(
        buildGenerator(scheme, request.frame, 0),
        hierarchy,
        tower,
        links,
        kernelFor,
      );
      const mesh = uniformMesh(request.drive, 8);
      return propagateExponentially(system, request.drive, mesh).slice();
    };
    const compiled = run(towerKernel);
    expect(compiled).toEqual(run(plainKernel));
    expect(compiled.some((x) => x !== 0 && x !== 1)).toBe(true);
  });

  it('come from the source in the repository', () => {
    expect(() => execFileSync('node', ['scripts/wasm.mjs', '--check'])).not.toThrow();
  }, 180_000);
});

describe('exponential steps', () => {
  it('are of order 4, on the driven emitter without a bath', () => {
    const request = twoLevelRequest([{ area: 3 * Math.PI, gdd: 20 }], 500);
    const bare = new LinearSystem(
      buildGenerator(request.scheme, request.frame, 0),
      new HierarchyBuilder().build(),
    );
    const exact = propagate(bare, request.drive, uniformMesh(request.drive, 2000));
    const error = (steps: number): number => {
      const state = propagateExponentially(
        exponentialFlow(bare),
        request.drive,
        uniformMesh(request.drive, steps),
      );
      return Math.max(...state.map((x, k) => Math.abs(x - exact[k])));
    };
    const order = Math.log2(error(400) / error(800));
    expect(order).toBeGreaterThan(3.8);
    expect(order).toBeLessThan(4.3);
  });
});

describe('tail of the filtered moments', () => {
  it('does not depend on when the drive is called over', () => {
    const request = twoLevelRequest([{ area: 1.2 * Math.PI, fwhm: 4 }], 300, { filter: FILTER });
    const size = { terms: 5, depth: 2 };
    const short = countWithHierarchy(request, phonons(4), size).values;
    const drive = silentlyLonger(request.drive, 25);
    const long = countWithHierarchy({ ...request, drive }, phonons(4), size).values;
    for (const name of ['m1', 'm2', 'm3', 'mean', 'multiphoton']) {
      expect(Math.abs(long[name] / short[name] - 1), name).toBeLessThan(1e-5);
    }
  });
});
