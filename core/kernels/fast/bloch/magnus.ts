import { INNER, NODES, OUTER } from './nodes.js';

/*
 * Rotation vectors of steps by the Magnus expansion of order 8 with six commutators (Blanes, Casas & Ros, BIT 42, 262
 * (2002); Blanes, Casas, Oteo & Ros, Phys. Rep. 470, 151 (2009), section 5): on Bloch vectors (Re ρ_gx, Im ρ_gx, inversion)
 * a commutator is a cross product. The generator times the step is (−a, b, z) with a + ib the drive. α1 … α4 are its Taylor
 * coefficients about the middle from four Gauss nodes; the energy z is linear in time, so that only α1 and α2 have a z.
 *   s1 = −[α1 + α3/28, α2 + 3α4/28]/28, r1 = [α1, s1 − α3/14]/3, s2 = [α1 + α3/28 + s1, α2 + 3α4/28 + r1],
 *   r2 = [α1 + 5s1/4, 2α3 + s2 + [α2, s1]/2], s3 = [α1 + α3/12 − 7s1/3 − s2/6, −9α2 − 9α4/4 + 63r1 + r2],
 *   Ω = α1 + α3/12 − 7s2/120 + s3/360.
 */

const HALF_INNER = 0.5 / INNER;
const HALF_OUTER = 0.5 / OUTER;
const SQUARE = INNER * INNER;
const SPREAD = 1 / (OUTER * OUTER - INNER * INNER);

/** Energy times the step in a block: of step n in the middle `first + n·slope`, and `slope` across it. */
export interface Energies {
  readonly first: number;
  readonly slope: number;
  /** Share by which the square of the drive shrinks the energy: part of the kicks' second-order error. */
  readonly axial: number;
}

/**
 * Rotations under a real drive, samples[4n + j], to vectors[3n …]. `edges`, unless null, receives the drive at the end of
 * each step, edges[2n] + i·edges[2n + 1].
 */
export function planarVectors(
  samples: Float64Array,
  energies: Energies,
  from: number,
  to: number,
  vectors: Float64Array,
  edges: Float64Array | null,
): void {
  const { first, slope, axial } = energies;
  for (let n = from, i = NODES * from, k = 3 * from; n < to; n++, i += NODES, k += 3) {
    const f0 = samples[i];
    const f1 = samples[i + 1];
    const f2 = samples[i + 2];
    const f3 = samples[i + 3];
    const even = 0.5 * (f1 + f2);
    const odd = HALF_INNER * (f2 - f1);
    const x3 = SPREAD * (even - 0.5 * (f0 + f3));
    const x1 = -even - SQUARE * x3;
    const x4 = SPREAD * (odd - HALF_OUTER * (f3 - f0));
    const x2 = -odd - SQUARE * x4;
    if (edges) {
      edges[2 * n] = -(x1 + 0.5 * x2 + 0.25 * x3 + 0.125 * x4);
      edges[2 * n + 1] = 0;
    }
    const z = (first + n * slope) * (1 - axial * x1 * x1);
    const ux = x1 + x3 * (1 / 28);
    const wx = x2 + x4 * (3 / 28);
    const s1 = (ux * slope - z * wx) * (1 / 28);
    const r1x = z * s1 * (-1 / 3);
    const r1y = z * x3 * (-1 / 42);
    const r1z = x1 * s1 * (1 / 3);
    const gx = wx + r1x;
    const gz = slope + r1z;
    const s2x = s1 * gz - z * r1y;
    const s2y = z * gx - ux * gz;
    const s2z = ux * r1y - s1 * gx;
    const py = 1.25 * s1;
    const qx = 2 * x3 + s2x - 0.5 * slope * s1;
    const qz = s2z + 0.5 * x2 * s1;
    const r2x = py * qz - z * s2y;
    const r2y = z * qx - x1 * qz;
    const r2z = x1 * s2y - py * qx;
    const sum = x1 + x3 * (1 / 12);
    const cx = sum - s2x * (1 / 6);
    const cy = s1 * (-7 / 3) - s2y * (1 / 6);
    const cz = z - s2z * (1 / 6);
    const dx = -9 * x2 - 2.25 * x4 + 63 * r1x + r2x;
    const dy = 63 * r1y + r2y;
    const dz = -9 * slope + 63 * r1z + r2z;
    vectors[k] = sum - s2x * (7 / 120) + (cy * dz - cz * dy) * (1 / 360);
    vectors[k + 1] = s2y * (-7 / 120) + (cz * dx - cx * dz) * (1 / 360);
    vectors[k + 2] = z - s2z * (7 / 120) + (cx * dy - cy * dx) * (1 / 360);
  }
}

/**
 * Rotations under a complex drive, samples[8n + 2j] + i·samples[8n + 2j + 1]. `turns`, unless null, holds what each step's own
 * frame adds to its energy.
 */
export function spatialVectors(
  samples: Float64Array,
  energies: Energies,
  turns: Float64Array | null,
  from: number,
  to: number,
  vectors: Float64Array,
  edges: Float64Array | null,
): void {
  const { first, slope, axial } = energies;
  for (let n = from, i = 2 * NODES * from, k = 3 * from; n < to; n++, i += 2 * NODES, k += 3) {
    const f1 = samples[i + 2];
    const f2 = samples[i + 4];
    const evenX = 0.5 * (f1 + f2);
    const oddX = HALF_INNER * (f2 - f1);
    const x3 = SPREAD * (evenX - 0.5 * (samples[i] + samples[i + 6]));
    const x1 = -evenX - SQUARE * x3;
    const x4 = SPREAD * (oddX - HALF_OUTER * (samples[i + 6] - samples[i]));
    const x2 = -oddX - SQUARE * x4;
    const g1 = samples[i + 3];
    const g2 = samples[i + 5];
    const evenY = 0.5 * (g1 + g2);
    const oddY = HALF_INNER * (g2 - g1);
    const y3 = SPREAD * (0.5 * (samples[i + 1] + samples[i + 7]) - evenY);
    const y1 = evenY - SQUARE * y3;
    const y4 = SPREAD * (HALF_OUTER * (samples[i + 7] - samples[i + 1]) - oddY);
    const y2 = oddY - SQUARE * y4;
    const turn = turns ? turns[n] : 0;
    if (edges) {
      const a = -(x1 + 0.5 * x2 + 0.25 * x3 + 0.125 * x4);
      const b = y1 + 0.5 * y2 + 0.25 * y3 + 0.125 * y4;
      edges[2 * n] = a * Math.cos(0.5 * turn) - b * Math.sin(0.5 * turn);
      edges[2 * n + 1] = a * Math.sin(0.5 * turn) + b * Math.cos(0.5 * turn);
    }
    const bare = first + n * slope + turn;
    const z = bare * (1 - axial * (x1 * x1 + y1 * y1));
    const ux = x1 + x3 * (1 / 28);
    const uy = y1 + y3 * (1 / 28);
    const wx = x2 + x4 * (3 / 28);
    const wy = y2 + y4 * (3 / 28);
    const s1x = (z * wy - uy * slope) * (1 / 28);
    const s1y = (ux * slope - z * wx) * (1 / 28);
    const s1z = (uy * wx - ux * wy) * (1 / 28);
    const hx = (s1x - x3 * (1 / 14)) * (1 / 3);
    const hy = (s1y - y3 * (1 / 14)) * (1 / 3);
    const hz = s1z * (1 / 3);
    const r1x = y1 * hz - z * hy;
    const r1y = z * hx - x1 * hz;
    const r1z = x1 * hy - y1 * hx;
    const ex = ux + s1x;
    const ey = uy + s1y;
    const ez = z + s1z;
    const gx = wx + r1x;
    const gy = wy + r1y;
    const gz = slope + r1z;
    const s2x = ey * gz - ez * gy;
    const s2y = ez * gx - ex * gz;
    const s2z = ex * gy - ey * gx;
    const px = x1 + 1.25 * s1x;
    const py = y1 + 1.25 * s1y;
    const pz = z + 1.25 * s1z;
    const qx = 2 * x3 + s2x + 0.5 * (y2 * s1z - slope * s1y);
    const qy = 2 * y3 + s2y + 0.5 * (slope * s1x - x2 * s1z);
    const qz = s2z + 0.5 * (x2 * s1y - y2 * s1x);
    const r2x = py * qz - pz * qy;
    const r2y = pz * qx - px * qz;
    const r2z = px * qy - py * qx;
    const sumX = x1 + x3 * (1 / 12);
    const sumY = y1 + y3 * (1 / 12);
    const cx = sumX - s1x * (7 / 3) - s2x * (1 / 6);
    const cy = sumY - s1y * (7 / 3) - s2y * (1 / 6);
    const cz = z - s1z * (7 / 3) - s2z * (1 / 6);
    const dx = -9 * x2 - 2.25 * x4 + 63 * r1x + r2x;
    const dy = -9 * y2 - 2.25 * y4 + 63 * r1y + r2y;
    const dz = -9 * slope + 63 * r1z + r2z;
    vectors[k] = sumX - s2x * (7 / 120) + (cy * dz - cz * dy) * (1 / 360);
    vectors[k + 1] = sumY - s2y * (7 / 120) + (cz * dx - cx * dz) * (1 / 360);
    vectors[k + 2] = z - s2z * (7 / 120) + (cx * dy - cy * dx) * (1 / 360);
  }
}
