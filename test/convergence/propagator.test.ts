import { describe, expect, it } from 'vitest';
import { HierarchyBuilder } from '../../core/counting/hierarchy.js';
import { buildGenerator } from '../../core/emitter/generator.js';
import { emitterModel } from '../../core/emitter/registry.js';
import { LinearSystem } from '../../core/kernels/linear-system.js';
import { propagate, uniformMesh } from '../../core/kernels/mesh.js';
import { ERROR5, NODES, STAGE_WEIGHTS, STAGES, WEIGHTS } from '../../core/kernels/runge-kutta.js';
import { createDrive } from '../../core/pulse/drive.js';
import { HBAR } from '../../core/units/constants.js';
import { tone, twoLevelEmitter } from '../support.js';

/**
 * A square drive detuned by Δ has a closed form, P = (Ω/Λ)² sin²(ΛT/2), Λ² = Ω² + (Δ/ħ)²
 * (Allen & Eberly, Optical Resonance and Two-Level Atoms). In the emitter's frame its envelope turns, so the method's
 * order for time-dependent coefficients is what is measured.
 */
function stateAfterSquare(steps: number): Float64Array {
  const detuning = 0.4;
  const scheme = emitterModel('two-level').scheme(twoLevelEmitter({ lifetime: 1e15 }));
  const pulse = {
    reference: 'exciton' as const,
    tones: [tone({ shape: 'square', fwhm: 10, area: 9, detuning })],
  };
  const drive = createDrive(pulse, { frame: 0, projection: 'full' });
  const system = new LinearSystem(buildGenerator(scheme, 0, 0), new HierarchyBuilder().build());
  return propagate(system, drive, uniformMesh(drive, steps));
}

function closedForm(): number {
  const rabi = 9 / 10;
  const effective = Math.hypot(rabi, 0.4 / HBAR);
  return (rabi / effective) ** 2 * Math.sin((effective * 10) / 2) ** 2;
}

describe('reference propagator', () => {
  it('converges with its declared order 8', () => {
    const exact = stateAfterSquare(400);
    expect(exact[1]).toBeCloseTo(closedForm(), 12);
    const logs = [20, 24, 28, 32, 36].map((n) => {
      const state = stateAfterSquare(n);
      const error = Math.hypot(...state.map((v, i) => v - exact[i]));
      return { x: Math.log(n), y: Math.log(error) };
    });
    const mx = logs.reduce((s, p) => s + p.x, 0) / logs.length;
    const my = logs.reduce((s, p) => s + p.y, 0) / logs.length;
    const slope =
      logs.reduce((s, p) => s + (p.x - mx) * (p.y - my), 0) / logs.reduce((s, p) => s + (p.x - mx) ** 2, 0);
    expect(-slope).toBeGreaterThan(7.75);
    expect(-slope).toBeLessThan(8.25);
  });

  // Hairer, Nørsett & Wanner, Solving Ordinary Differential Equations I, section II.1–II.2: quadrature and row-sum conditions.
  it('has coefficients that meet the quadrature conditions to order 8', () => {
    for (let k = 1; k <= 8; k++) {
      const sum = WEIGHTS.reduce((s, b, i) => s + b * NODES[i] ** (k - 1), 0);
      expect(sum).toBeCloseTo(1 / k, 13);
    }
    for (let i = 1; i < STAGES; i++) {
      expect(STAGE_WEIGHTS[i].reduce((s, a) => s + a, 0)).toBeCloseTo(NODES[i], 13);
    }
    for (let k = 1; k <= 5; k++) {
      expect(ERROR5.reduce((s, e, i) => s + e * NODES[i] ** (k - 1), 0)).toBeCloseTo(0, 13);
    }
  });
});
