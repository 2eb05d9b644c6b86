import type { Energies } from './magnus.js';
import { INNER, NODES, OUTER } from './nodes.js';

const HALF_INNER = 0.5 / INNER;
const HALF_OUTER = 0.5 / OUTER;
const SQUARE = INNER * INNER;
const SPREAD = 1 / (OUTER * OUTER - INNER * INNER);

/**
 * Reverse of `spatialVectors` (magnus.ts), of which the first half is repeated: from derivatives by the rotation vectors of
 * the steps, one array per scalar, to derivatives by the samples, slopes[8n + 2j], slopes[8n + 2j + 1].
 * @returns per scalar the derivative by an energy (times the step) common to all steps
 */
export function spatialAdjoint(
  samples: Float64Array,
  energies: Energies,
  turns: Float64Array | null,
  steps: number,
  byVector: readonly Float64Array[],
  bySample: readonly Float64Array[],
): number[] {
  const byEnergy = byVector.map(() => 0);
  const { first, slope } = energies;
  for (let n = 0, i = 0, k = 0; n < steps; n++, i += 2 * NODES, k += 3) {
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
    const z = first + n * slope + (turns ? turns[n] : 0);
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
    const cx = x1 + x3 * (1 / 12) - s1x * (7 / 3) - s2x * (1 / 6);
    const cy = y1 + y3 * (1 / 12) - s1y * (7 / 3) - s2y * (1 / 6);
    const cz = z - s1z * (7 / 3) - s2z * (1 / 6);
    const dx = -9 * x2 - 2.25 * x4 + 63 * r1x + (py * qz - pz * qy);
    const dy = -9 * y2 - 2.25 * y4 + 63 * r1y + (pz * qx - px * qz);
    const dz = -9 * slope + 63 * r1z + (px * qy - py * qx);
    for (let s = 0; s < byVector.length; s++) {
      const from = byVector[s];
      const ox = from[k];
      const oy = from[k + 1];
      const oz = from[k + 2];
      // Capitals of the vectors above: derivatives by them. For y = a × b: A = b × Y, B = Y × a.
      const Cx = (dy * oz - dz * oy) * (1 / 360);
      const Cy = (dz * ox - dx * oz) * (1 / 360);
      const Cz = (dx * oy - dy * ox) * (1 / 360);
      const Dx = (oy * cz - oz * cy) * (1 / 360);
      const Dy = (oz * cx - ox * cz) * (1 / 360);
      const Dz = (ox * cy - oy * cx) * (1 / 360);
      const Px = qy * Dz - qz * Dy;
      const Py = qz * Dx - qx * Dz;
      const Pz = qx * Dy - qy * Dx;
      const Qx = Dy * pz - Dz * py;
      const Qy = Dz * px - Dx * pz;
      const Qz = Dx * py - Dy * px;
      const S2x = Qx - ox * (7 / 120) - Cx * (1 / 6);
      const S2y = Qy - oy * (7 / 120) - Cy * (1 / 6);
      const S2z = Qz - oz * (7 / 120) - Cz * (1 / 6);
      const Ex = gy * S2z - gz * S2y;
      const Ey = gz * S2x - gx * S2z;
      const Ez = gx * S2y - gy * S2x;
      const Gx = S2y * ez - S2z * ey;
      const Gy = S2z * ex - S2x * ez;
      const Gz = S2x * ey - S2y * ex;
      const Rx = 63 * Dx + Gx;
      const Ry = 63 * Dy + Gy;
      const Rz = 63 * Dz + Gz;
      const Hx = (Ry * z - Rz * y1) * (1 / 3);
      const Hy = (Rz * x1 - Rx * z) * (1 / 3);
      const Hz = (Rx * y1 - Ry * x1) * (1 / 3);
      const S1x = (Cx * (-7 / 3) + 1.25 * Px + 0.5 * (Qy * slope - Qz * y2) + Ex + Hx) * (-1 / 28);
      const S1y = (Cy * (-7 / 3) + 1.25 * Py + 0.5 * (Qz * x2 - Qx * slope) + Ey + Hy) * (-1 / 28);
      const S1z = (Cz * (-7 / 3) + 1.25 * Pz + 0.5 * (Qx * y2 - Qy * x2) + Ez + Hz) * (-1 / 28);
      const Ux = Ex + (wy * S1z - slope * S1y);
      const Uy = Ey + (slope * S1x - wx * S1z);
      const Uz = Ez + (wx * S1y - wy * S1x);
      const Wx = Gx + (S1y * z - S1z * uy);
      const Wy = Gy + (S1z * ux - S1x * z);
      const X1 = ox + Cx + Px + Ux + hy * Rz - hz * Ry;
      const Y1 = oy + Cy + Py + Uy + hz * Rx - hx * Rz;
      byEnergy[s] += oz + Cz + Pz + Uz + hx * Ry - hy * Rx;
      const X2 = -9 * Dx + 0.5 * (s1y * Qz - s1z * Qy) + Wx;
      const Y2 = -9 * Dy + 0.5 * (s1z * Qx - s1x * Qz) + Wy;
      const X3 = (ox + Cx) * (1 / 12) + 2 * Qx - Hx * (1 / 14) + Ux * (1 / 28);
      const Y3 = (oy + Cy) * (1 / 12) + 2 * Qy - Hy * (1 / 14) + Uy * (1 / 28);
      const X4 = -2.25 * Dx + Wx * (3 / 28);
      const Y4 = -2.25 * Dy + Wy * (3 / 28);
      const to = bySample[s];
      const K3 = SPREAD * (SQUARE * X1 - X3);
      const K4 = SPREAD * (SQUARE * X2 - X4);
      const even = 0.5 * (-X1 - K3);
      const odd = HALF_INNER * (-X2 - K4);
      to[i] = 0.5 * K3 - HALF_OUTER * K4;
      to[i + 6] = 0.5 * K3 + HALF_OUTER * K4;
      to[i + 2] = even - odd;
      to[i + 4] = even + odd;
      const L3 = SPREAD * (Y3 - SQUARE * Y1);
      const L4 = SPREAD * (Y4 - SQUARE * Y2);
      const level = 0.5 * (Y1 - L3);
      const tilt = HALF_INNER * (Y2 - L4);
      to[i + 1] = 0.5 * L3 - HALF_OUTER * L4;
      to[i + 7] = 0.5 * L3 + HALF_OUTER * L4;
      to[i + 3] = level - tilt;
      to[i + 5] = level + tilt;
    }
  }
  return byEnergy;
}
