/**
 * From derivatives by the axes of kicks to derivatives by the rotation vectors of steps. A small turn φ after step n, seen
 * from the rotating picture, turns all later axes v by −φ × v; so its derivative is −Σ v × ∂/∂v over the later kicks, turned
 * into the frame after the step, and the left Jacobian of the exponential leads to the rotation vector (Blanes et al.,
 * Phys. Rep. 470, 151 (2009), section 2.2). Axis n + 1 stands after step n.
 * @param torque the sum over kicks after the last step; on return that over all kicks after the first
 * @param vectors rotation vectors of the steps, overwritten by nothing; `quaternions` the rotation after each step
 * @param turns angle gained by each step's own frame, or null
 */
export function torques(
  torque: Float64Array,
  slopes: Float64Array,
  axes: Float64Array,
  vectors: Float64Array,
  quaternions: Float64Array,
  turns: Float64Array | null,
  steps: number,
  out: Float64Array,
): void {
  let tx = torque[0];
  let ty = torque[1];
  let tz = torque[2];
  for (let n = steps - 1; n >= 0; n--) {
    const k = 3 * (n + 1);
    const gx = slopes[k];
    const gy = slopes[k + 1];
    const gz = slopes[k + 2];
    const vx = axes[k];
    const vy = axes[k + 1];
    const vz = axes[k + 2];
    tx -= vy * gz - vz * gy;
    ty -= vz * gx - vx * gz;
    tz -= vx * gy - vy * gx;
    // q t q*: into the frame after the step.
    const w = quaternions[4 * n];
    const x = quaternions[4 * n + 1];
    const y = quaternions[4 * n + 2];
    const z = quaternions[4 * n + 3];
    const ax = 2 * (y * tz - z * ty);
    const ay = 2 * (z * tx - x * tz);
    const az = 2 * (x * ty - y * tx);
    let ux = tx + w * ax + y * az - z * ay;
    let uy = ty + w * ay + z * ax - x * az;
    const uz = tz + w * az + x * ay - y * ax;
    if (turns && turns[n] !== 0) {
      const c = Math.cos(0.5 * turns[n]);
      const s = Math.sin(0.5 * turns[n]);
      const rx = c * ux - s * uy;
      uy = s * ux + c * uy;
      ux = rx;
    }
    const i = 3 * n;
    const px = vectors[i];
    const py = vectors[i + 1];
    const pz = vectors[i + 2];
    const square = px * px + py * py + pz * pz;
    let sinc: number;
    let cosc: number;
    let rest: number;
    if (square < 1) {
      // Power series of sin θ/θ, (1 − cos θ)/θ² and (θ − sin θ)/θ³, exact to 1e-15.
      rest =
        (1 / 6) *
        (1 -
          (square / 20) *
            (1 -
              (square / 42) *
                (1 - (square / 72) * (1 - (square / 110) * (1 - (square / 156) * (1 - square / 210))))));
      cosc =
        0.5 *
        (1 -
          (square / 12) *
            (1 -
              (square / 30) *
                (1 - (square / 56) * (1 - (square / 90) * (1 - (square / 132) * (1 - square / 182))))));
      sinc = 1 - square * rest;
    } else {
      const angle = Math.sqrt(square);
      sinc = Math.sin(angle) / angle;
      cosc = (1 - Math.cos(angle)) / square;
      rest = (1 - sinc) / square;
    }
    const along = rest * (px * ux + py * uy + pz * uz);
    out[i] = sinc * ux + cosc * (uy * pz - uz * py) + along * px;
    out[i + 1] = sinc * uy + cosc * (uz * px - ux * pz) + along * py;
    out[i + 2] = sinc * uz + cosc * (ux * py - uy * px) + along * pz;
  }
  torque[0] = tx;
  torque[1] = ty;
  torque[2] = tz;
}

/** Adds one kick to a torque. */
export function addTorque(torque: Float64Array, slopes: Float64Array, axes: Float64Array, n: number): void {
  const k = 3 * n;
  const vx = axes[k];
  const vy = axes[k + 1];
  const vz = axes[k + 2];
  const gx = slopes[k];
  const gy = slopes[k + 1];
  const gz = slopes[k + 2];
  torque[0] -= vy * gz - vz * gy;
  torque[1] -= vz * gx - vx * gz;
  torque[2] -= vx * gy - vy * gx;
}
