/** Dense symmetric matrix, rows. */
export type Matrix = readonly (readonly number[])[];

/** Quadratic model of a constrained problem around the current point, for a step p. */
export interface QuadraticProgram {
  /** Gradient of the objective. */
  readonly gradient: readonly number[];
  /** Positive definite Hessian of the Lagrangian. */
  readonly hessian: Matrix;
  /** Values c_j of the constraints c_j + a_j·p ≤ 0, and their gradients a_j. */
  readonly values: readonly number[];
  readonly normals: Matrix;
  /** Bounds of the step, lower ≤ 0 ≤ upper. */
  readonly lower: readonly number[];
  readonly upper: readonly number[];
  /** Weight μ of the constraint violation; bounds every multiplier. */
  readonly penalty: number;
}

const dot = (a: readonly number[], b: readonly number[]) =>
  a.reduce((sum, value, i) => sum + value * b[i], 0);

const BISECTIONS = 60;
/** Residual of an active constraint that is as good as none. */
const SETTLED = 1e-12;
/** Rounds over several constraints, whose multipliers depend on one another. */
const ROUNDS = 200;

/** Solves M q = r for a small positive definite M by Cholesky factors. */
function solvePositive(matrix: Matrix, right: readonly number[]): number[] {
  const n = right.length;
  const low = matrix.map((row) => [...row]);
  const q = [...right];
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      for (let k = 0; k < j; k++) low[i][j] -= low[i][k] * low[j][k];
      low[i][j] = i === j ? Math.sqrt(Math.max(low[i][i], Number.MIN_VALUE)) : low[i][j] / low[j][j];
    }
    for (let k = 0; k < i; k++) q[i] -= low[i][k] * q[k];
    q[i] /= low[i][i];
  }
  for (let i = n - 1; i >= 0; i--) {
    for (let k = i + 1; k < n; k++) q[i] -= low[k][i] * q[k];
    q[i] /= low[i][i];
  }
  return q;
}

/**
 * Minimises g·p + ½ pᵀHp over a box by the primal active-set method (Nocedal & Wright, section 16.5); `step` is the
 * feasible start and is overwritten.
 */
function boxMinimum(
  gradient: readonly number[],
  hessian: Matrix,
  program: QuadraticProgram,
  step: number[],
): void {
  const { lower, upper } = program;
  const fixed = step.map(() => false);
  for (let pass = 0; pass < 20 * (step.length + 1); pass++) {
    const free = step.flatMap((_, i) => (fixed[i] ? [] : [i]));
    const slopes = hessian.map((row, i) => gradient[i] + dot(row, step));
    const block = free.map((i) => free.map((k) => hessian[i][k]));
    const move = solvePositive(
      block,
      free.map((i) => -slopes[i]),
    );
    let share = 1;
    let blocking = -1;
    free.forEach((i, at) => {
      const room = move[at] > 0 ? upper[i] - step[i] : lower[i] - step[i];
      if (move[at] !== 0 && room / move[at] < share) {
        share = room / move[at];
        blocking = i;
      }
    });
    free.forEach((i, at) => {
      step[i] = Math.min(Math.max(step[i] + share * move[at], lower[i]), upper[i]);
    });
    if (blocking >= 0) {
      fixed[blocking] = true;
      step[blocking] =
        step[blocking] - lower[blocking] < upper[blocking] - step[blocking]
          ? lower[blocking]
          : upper[blocking];
      continue;
    }
    // At the minimum over the free ones: let go the bound that is held against the slope the most.
    let wrongest = -1;
    let most = 1e-12;
    for (let i = 0; i < step.length; i++) {
      if (!fixed[i] || lower[i] === upper[i]) continue;
      const slope = gradient[i] + dot(hessian[i], step);
      const wrong = step[i] === lower[i] ? -slope : slope;
      if (wrong > most) {
        most = wrong;
        wrongest = i;
      }
    }
    if (wrongest < 0) return;
    fixed[wrongest] = false;
  }
}

/**
 * Minimises g·p + ½ pᵀHp + μ Σ max(0, c_j + a_j·p) over a box: the elastic subproblem of a trust-region SQP method
 * (Nocedal & Wright, *Numerical Optimization*, 2nd ed., section 18.5). Solved through its dual: each multiplier within
 * [0, μ] by bisection on its constraint, cyclically for several. Returns the step and the multipliers.
 */
export function solveQuadratic(program: QuadraticProgram): { step: number[]; multipliers: number[] } {
  const { gradient, hessian, values, normals, penalty } = program;
  const step = gradient.map(() => 0);
  const multipliers = values.map(() => 0);
  const solve = () => {
    const pulled = gradient.map((g, i) => multipliers.reduce((sum, m, j) => sum + m * normals[j][i], g));
    boxMinimum(pulled, hessian, program, step);
  };
  const residual = (j: number) => values[j] + dot(normals[j], step);
  const settle = (j: number) => {
    const now = residual(j);
    // Settled already, as most are from the second round on.
    if (multipliers[j] === 0 ? now <= 0 : multipliers[j] < penalty && Math.abs(now) <= SETTLED) return;
    multipliers[j] = 0;
    solve();
    if (residual(j) <= 0) return;
    multipliers[j] = penalty;
    solve();
    if (residual(j) >= 0) return;
    let low = 0;
    let high = penalty;
    for (let k = 0; k < BISECTIONS && high - low > 1e-13 * high; k++) {
      multipliers[j] = (low + high) / 2;
      solve();
      if (residual(j) > 0) low = multipliers[j];
      else high = multipliers[j];
    }
    multipliers[j] = high;
    solve();
  };
  solve();
  const rounds = values.length > 1 ? ROUNDS : 1;
  for (let round = 0; round < rounds; round++) {
    const before = [...multipliers];
    for (let j = 0; j < values.length; j++) settle(j);
    if (multipliers.every((m, j) => Math.abs(m - before[j]) <= 1e-10 * penalty)) break;
  }
  return { step, multipliers };
}

/**
 * Powell's damped BFGS update of a positive definite matrix (Powell, Lecture Notes in Mathematics 630, 144 (1978)):
 * `s` the step, `y` the change of the gradient of the Lagrangian.
 */
export function dampedUpdate(hessian: Matrix, s: readonly number[], y: readonly number[]): number[][] {
  const hs = hessian.map((row) => dot(row, s));
  const shs = dot(s, hs);
  const sy = dot(s, y);
  if (!(shs > 0)) return hessian.map((row) => [...row]);
  const theta = sy >= 0.2 * shs ? 1 : (0.8 * shs) / (shs - sy);
  const r = y.map((value, i) => theta * value + (1 - theta) * hs[i]);
  const sr = dot(s, r);
  return hessian.map((row, i) => row.map((value, k) => value - (hs[i] * hs[k]) / shs + (r[i] * r[k]) / sr));
}
