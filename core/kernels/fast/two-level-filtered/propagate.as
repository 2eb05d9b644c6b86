/**
 * AssemblyScript: the loops of propagate.ts on complex numbers as vectors of two. Sums are taken in the order of the plain
 * JavaScript twin, so that both give the same bits. All offsets are in bytes.
 */

// A record per block: places of the block, of its damping, of the block with one pair less, of its sources on the left (opening,
// closing) and on the right, then the weights of the closing ones.
const RECORD: usize = 48;
const ROW: usize = 88;

/** a·x + b·u·y, the factors a and b being 1 without dephasing. */
// @ts-ignore: decorator
@inline
function sources(dephased: bool, a: v128, x: v128, b: v128, u: v128, y: v128): v128 {
  if (dephased) return f64x2.add(f64x2.mul(a, x), f64x2.mul(f64x2.mul(b, u), y));
  return f64x2.add(x, f64x2.mul(u, y));
}

/** x·(1 + i·turn), with (−turn, turn) given. */
// @ts-ignore: decorator
@inline
function turnedBy(dephased: bool, turns: v128, x: v128): v128 {
  if (dephased) return f64x2.add(x, f64x2.mul(turns, v128.shuffle<f64>(x, x, 1, 0)));
  return x;
}

// @ts-ignore: decorator
@inline
function times(re: v128, im: v128, x: v128): v128 {
  return f64x2.add(f64x2.mul(re, x), f64x2.mul(im, v128.shuffle<f64>(x, x, 1, 0)));
}

let complex: i32 = 0;
let hermitian: i32 = 0;
let records: usize = 0;
let size: usize = 0;
// Blocks, what events see, its sums over sources, changes by events on the left: one after the other.
let y: usize = 0;
let seen: usize = 0;
let fed: usize = 0;
let change: usize = 0;
let damping: usize = 0;
let intoTrace: f64 = 0;
let intoCoherence: f64 = 0;
let pair: f64 = 0;
let pairDriven: f64 = 0;
let twice: f64 = 0;
let decaying: f64 = 0;
let dephasing: f64 = 0;
let opened: f64 = 0;
let closed: f64 = 0;
let both: f64 = 0;
let turn: f64 = 0;

export function place(complexCount: i32, hermitianCount: i32, bytes: usize, list: usize, blocks: usize, factors: usize): void {
  complex = complexCount;
  hermitian = hermitianCount;
  size = bytes;
  records = list;
  y = blocks;
  seen = y + size;
  fed = seen + size;
  change = fed + size;
  damping = factors;
}

export function configure(numbers: usize): void {
  intoTrace = load<f64>(numbers);
  intoCoherence = load<f64>(numbers, 8);
  pair = load<f64>(numbers, 16);
  pairDriven = load<f64>(numbers, 24);
  twice = load<f64>(numbers, 32);
  decaying = load<f64>(numbers, 40);
  opened = load<f64>(numbers, 48);
  closed = load<f64>(numbers, 56);
  turn = load<f64>(numbers, 64);
  dephasing = load<f64>(numbers, 72);
  both = load<f64>(numbers, 80);
}

export function propagate(steps: i32, table: usize): void {
  if (dephasing != 0) for (let n = 0; n < steps; n++, table += ROW) step(table, true);
  else for (let n = 0; n < steps; n++, table += ROW) step(table, false);
}

/** Without dephasing some factors are 1 or 0 (`dephased` is known when this is compiled). */
// @ts-ignore: decorator
@inline
function step(table: usize, dephased: bool): void {
  const second = records + <usize>complex * RECORD;
  const sign = f64x2(-1, 1);
  const pairs = f64x2.splat(pair);
  const traces = f64x2.splat(intoTrace);
  const coherences = f64x2.splat(intoCoherence);
  const opening = f64x2.splat(opened);
  const closing = f64x2.splat(closed);
  const turnLeft = f64x2(-turn, turn);
  const turnRight = f64x2(turn, -turn);
  const seenChange = f64x2.splat(2 * both);
  const re = load<f64>(table, 72);
  const im = load<f64>(table, 80);
  const square = pairDriven * (re * re + im * im);
  const fx = dephasing * im;
  const fy = dephasing * re;
  // Rotation, decay and damping over a step, what events then see, and coincident pairs.
  {
    const m0 = v128.load_splat<f64>(table);
    const m1 = v128.load_splat<f64>(table, 8);
    const m2 = v128.load_splat<f64>(table, 16);
    const m3 = v128.load_splat<f64>(table, 24);
    const m4 = v128.load_splat<f64>(table, 32);
    const m5 = v128.load_splat<f64>(table, 40);
    const m6 = v128.load_splat<f64>(table, 48);
    const m7 = v128.load_splat<f64>(table, 56);
    const k8 = v128.load_splat<f64>(table, 64);
    const m8 = f64x2.sub(f64x2.splat(1), k8);
    const driven = f64x2.splat(square);
    const vx = f64x2.splat(fx);
    const vy = f64x2.splat(fy);
    let at = records;
    for (let i = 0; i < complex; i++, at += RECORD) {
      const o = <usize>load<u32>(at);
      const d = damping + <usize>load<u32>(at, 4);
      const p = <usize>load<u32>(at, 8);
      const f = v128.load_splat<f64>(d, 8);
      const s = v128.load(y + o);
      const r = v128.load(y + o, 16);
      const x = v128.load(y + o, 32);
      const t = v128.load(y + o, 48);
      const z = f64x2.sub(t, x);
      const b = f64x2.mul(
        v128.load_splat<f64>(d, 16),
        f64x2.sub(
          f64x2.add(f64x2.mul(k8, t), f64x2.mul(m8, x)),
          f64x2.add(f64x2.mul(m6, s), f64x2.mul(m7, r)),
        ),
      );
      const te = f64x2.mul(v128.load_splat<f64>(d), t);
      let ss = f64x2.mul(f, f64x2.add(f64x2.add(f64x2.mul(m0, s), f64x2.mul(m1, r)), f64x2.mul(m2, z)));
      let rr = f64x2.mul(f, f64x2.add(f64x2.add(f64x2.mul(m3, s), f64x2.mul(m4, r)), f64x2.mul(m5, z)));
      if (dephased) {
        ss = f64x2.add(ss, f64x2.mul(vx, te));
        rr = f64x2.add(rr, f64x2.mul(vy, te));
      }
      const ir = f64x2.mul(sign, v128.shuffle<f64>(rr, rr, 1, 0));
      v128.store(seen + o, f64x2.sub(ss, ir));
      v128.store(seen + o, f64x2.add(ss, ir), 16);
      v128.store(seen + o, b, 32);
      if (p == 0) {
        v128.store(y + o, ss);
        v128.store(y + o, rr, 16);
        v128.store(y + o, b, 32);
        v128.store(y + o, te, 48);
        continue;
      }
      const add = f64x2.mul(pairs, v128.load(seen + p, 32));
      v128.store(y + o, f64x2.sub(ss, f64x2.mul(driven, v128.load(y + p))));
      v128.store(y + o, f64x2.sub(rr, f64x2.mul(driven, v128.load(y + p, 16))), 16);
      v128.store(y + o, f64x2.add(b, f64x2.mul(driven, v128.load(y + p, 32))), 32);
      v128.store(y + o, f64x2.add(f64x2.add(te, add), f64x2.mul(driven, v128.load(y + p, 48))), 48);
    }
  }
  {
    const m0 = load<f64>(table);
    const m1 = load<f64>(table, 8);
    const m2 = load<f64>(table, 16);
    const m3 = load<f64>(table, 24);
    const m4 = load<f64>(table, 32);
    const m5 = load<f64>(table, 40);
    const m6 = load<f64>(table, 48);
    const m7 = load<f64>(table, 56);
    const k8 = load<f64>(table, 64);
    const m8 = 1 - k8;
    let at = second;
    for (let i = 0; i < hermitian; i++, at += RECORD) {
      const o = <usize>load<u32>(at);
      const d = damping + <usize>load<u32>(at, 4);
      const p = <usize>load<u32>(at, 8);
      const f = load<f64>(d, 8);
      const s = load<f64>(y + o);
      const r = load<f64>(y + o, 16);
      const x = load<f64>(y + o, 32);
      const t = load<f64>(y + o, 48);
      const z = t - x;
      const b = load<f64>(d, 16) * (k8 * t + m8 * x - (m6 * s + m7 * r));
      const te = load<f64>(d) * t;
      const ss = f * (m0 * s + m1 * r + m2 * z) + fx * te;
      const rr = f * (m3 * s + m4 * r + m5 * z) + fy * te;
      store<f64>(seen + o, ss);
      store<f64>(seen + o, -rr, 8);
      store<f64>(seen + o, ss, 16);
      store<f64>(seen + o, rr, 24);
      store<f64>(seen + o, b, 32);
      const add = pair * load<f64>(seen + p, 32);
      store<f64>(y + o, ss - square * load<f64>(y + p));
      store<f64>(y + o, rr - square * load<f64>(y + p, 16), 16);
      store<f64>(y + o, b + square * load<f64>(y + p, 32), 32);
      store<f64>(y + o, te + add + square * load<f64>(y + p, 48), 48);
    }
  }
  // Sums over the sources of every block.
  let at = records;
  for (let i = 0; i < complex; i++, at += RECORD) {
    const o = fed + <usize>load<u32>(at);
    const a = seen + <usize>load<u32>(at, 12);
    const b = seen + <usize>load<u32>(at, 16);
    const c = seen + <usize>load<u32>(at, 20);
    const d = seen + <usize>load<u32>(at, 24);
    const u = v128.load_splat<f64>(at, 32);
    const v = v128.load_splat<f64>(at, 40);
    if (load<u32>(at, 8) == 0) {
      // Nothing was closed yet.
      v128.store(o, factored(dephased, opening, v128.load(a)));
      v128.store(o, v128.load(a, 32), 16);
      if (load<u32>(at, 20) == 0) continue;
      v128.store(o, factored(dephased, opening, v128.load(c, 16)), 32);
      v128.store(o, v128.load(c, 32), 48);
      continue;
    }
    v128.store(o, sources(dephased, opening, v128.load(a), closing, u, v128.load(b)));
    v128.store(o, f64x2.add(v128.load(a, 32), f64x2.mul(u, v128.load(b, 32))), 16);
    v128.store(o, sources(dephased, opening, v128.load(c, 16), closing, v, v128.load(d, 16)), 32);
    v128.store(o, f64x2.add(v128.load(c, 32), f64x2.mul(v, v128.load(d, 32))), 48);
  }
  const conjugate = f64x2(1, -1);
  for (let i = 0; i < hermitian; i++, at += RECORD) {
    const o = fed + <usize>load<u32>(at);
    const c = seen + <usize>load<u32>(at, 20);
    const d = seen + <usize>load<u32>(at, 24);
    const v = v128.load_splat<f64>(at, 40);
    const x = sources(dephased, opening, v128.load(c, 16), closing, v, v128.load(d, 16));
    const b = f64x2.add(v128.load(c, 32), f64x2.mul(v, v128.load(d, 32)));
    v128.store(o, f64x2.mul(conjugate, x));
    v128.store(o, f64x2.mul(conjugate, b), 16);
    v128.store(o, x, 32);
    v128.store(o, b, 48);
  }
  // iΩ times the coefficients: w and x on the left, their conjugates on the right.
  const wr = f64x2.splat(-twice * im);
  const wi = f64x2(-(twice * re), twice * re);
  const xr = f64x2.splat(-decaying * im);
  const xi = f64x2(-(decaying * re), decaying * re);
  at = records;
  for (let i = 0; i < complex; i++, at += RECORD) {
    const own = <usize>load<u32>(at);
    const o = fed + own;
    const a = fed + <usize>load<u32>(at, 12);
    const b = fed + <usize>load<u32>(at, 16);
    let p = v128.load(a);
    let q = v128.load(a, 16);
    if (load<u32>(at, 8) != 0) {
      const u = v128.load_splat<f64>(at, 32);
      p = f64x2.add(p, f64x2.mul(u, v128.load(b)));
      q = f64x2.add(q, f64x2.mul(u, v128.load(b, 16)));
    }
    const into = v128.load(o, 16);
    const t = f64x2.mul(traces, f64x2.add(f64x2.add(v128.load(o), times(wr, wi, p)), times(xr, xi, into)));
    const d = f64x2.mul(coherences, f64x2.add(into, times(wr, wi, q)));
    v128.store(change + own, f64x2.mul(seenChange, d));
    const h = y + own;
    v128.store(h, f64x2.add(v128.load(h), d));
    v128.store(h, f64x2.sub(v128.load(h, 16), f64x2.mul(sign, v128.shuffle<f64>(d, d, 1, 0))), 16);
    const turned = turnedBy(dephased, turnLeft, t);
    v128.store(h, f64x2.add(v128.load(h, 48), turned), 48);
  }
  // Events on the right come after those on the left: what these have changed counts.
  at = records;
  for (let i = 0; i < complex; i++, at += RECORD) {
    if ((load<u32>(at, 20) | load<u32>(at, 24)) == 0) continue;
    const own = <usize>load<u32>(at);
    const c = change + <usize>load<u32>(at, 20);
    const d = change + <usize>load<u32>(at, 24);
    const v = v128.load_splat<f64>(at, 40);
    const g = sources(dephased, opening, v128.load(c), closing, v, v128.load(d));
    v128.store(change + own, g, 16);
    v128.store(fed + own, f64x2.add(v128.load(fed + own, 32), g), 32);
  }
  const vi = f64x2.neg(wi);
  const zi = f64x2.neg(xi);
  at = records;
  for (let i = 0; i < complex; i++, at += RECORD) {
    if ((load<u32>(at, 20) | load<u32>(at, 24)) == 0) continue;
    const own = <usize>load<u32>(at);
    const o = fed + own;
    const c = fed + <usize>load<u32>(at, 20);
    const d = fed + <usize>load<u32>(at, 24);
    const v = v128.load_splat<f64>(at, 40);
    const p = f64x2.add(v128.load(c, 32), f64x2.mul(v, v128.load(d, 32)));
    const q = f64x2.add(v128.load(c, 48), f64x2.mul(v, v128.load(d, 48)));
    const into = v128.load(o, 48);
    const t = f64x2.mul(
      traces,
      f64x2.add(f64x2.add(v128.load(o, 32), times(wr, vi, p)), times(xr, zi, into)),
    );
    const x = f64x2.mul(coherences, f64x2.add(into, times(wr, vi, q)));
    const h = y + own;
    v128.store(h, f64x2.add(v128.load(h), x));
    v128.store(h, f64x2.add(v128.load(h, 16), f64x2.mul(sign, v128.shuffle<f64>(x, x, 1, 0))), 16);
    const turned = turnedBy(dephased, turnRight, t);
    v128.store(h, f64x2.add(v128.load(h, 48), turned), 48);
  }
  // Both sides at once of Hermitian blocks; half of either see what the other has changed.
  const ar = -twice * im;
  const ai = twice * re;
  const cr = -decaying * im;
  const ci = decaying * re;
  at = second;
  for (let i = 0; i < hermitian; i++, at += RECORD) {
    if ((load<u32>(at, 20) | load<u32>(at, 24)) == 0) continue;
    const own = <usize>load<u32>(at);
    const o = fed + own;
    const jc = <usize>load<u32>(at, 20);
    const jd = <usize>load<u32>(at, 24);
    const c = fed + jc;
    const d = fed + jd;
    const v = load<f64>(at, 40);
    const pr = 2 * (load<f64>(c, 32) + v * load<f64>(d, 32)) -
      (load<f64>(change + jc, 16) + v * load<f64>(change + jd, 16));
    const pi = 2 * (load<f64>(c, 40) + v * load<f64>(d, 40)) -
      (load<f64>(change + jc, 24) + v * load<f64>(change + jd, 24));
    const qr = load<f64>(c, 48) + v * load<f64>(d, 48);
    const qi = load<f64>(c, 56) + v * load<f64>(d, 56);
    const br = load<f64>(o, 48);
    const bi = load<f64>(o, 56);
    const sr = 2 * (load<f64>(o, 32) + (cr * br + ci * bi)) + ar * pr + ai * pi;
    const si = 2 * (load<f64>(o, 40) + (cr * bi - ci * br)) + ar * pi - ai * pr;
    const t = intoTrace * (sr + turn * si + (opened * load<f64>(change + jc) + closed * v * load<f64>(change + jd)));
    const dr = 2 * intoCoherence * (br + ar * qr + ai * qi);
    const di = 2 * intoCoherence * (bi + ar * qi - ai * qr);
    const h = y + own;
    store<f64>(h, load<f64>(h) + dr);
    store<f64>(h, load<f64>(h, 16) - di, 16);
    store<f64>(h, load<f64>(h, 48) + t, 48);
  }
}

/** The same, and what each step began with and came through: blocks before it, then the three arrays, written in place. */
export function record(steps: i32, table: usize, tape: usize): void {
  for (let n = 0; n < steps; n++, table += ROW) {
    memory.copy(tape, y, size);
    seen = tape + size;
    fed = seen + size;
    change = fed + size;
    if (dephasing != 0) step(table, true);
    else step(table, false);
    tape += 4 * size;
  }
  seen = y + size;
  fed = seen + size;
  change = fed + size;
}

// @ts-ignore: decorator
@inline
function swap(x: v128): v128 {
  return v128.shuffle<f64>(x, x, 1, 0);
}

// @ts-ignore: decorator
@inline
function factored(dephased: bool, a: v128, x: v128): v128 {
  return dephased ? f64x2.mul(a, x) : x;
}

// @ts-ignore: decorator
@inline
function total(x: v128): f64 {
  return f64x2.extract_lane(x, 0) + f64x2.extract_lane(x, 1);
}

// @ts-ignore: decorator
@inline
function addTo(at: usize, x: v128): void {
  v128.store(at, f64x2.add(v128.load(at), x));
}

/**
 * Reverse sweeps over recorded steps, one per scalar: `lambda` holds the derivatives by the blocks after the last step, and in
 * the end those before the first one; `out` receives the derivatives by the rows of the table, `sums` gains those by the nine
 * numbers of numberSlopes (step.ts). `work` is room for three arrays.
 */
export function sweep(
  steps: i32,
  table: usize,
  tape: usize,
  scalars: i32,
  lambda: usize,
  out: usize,
  outBytes: usize,
  sums: usize,
  work: usize,
): void {
  for (let n = steps - 1; n >= 0; n--) {
    const row = <usize>n * ROW;
    for (let s = 0; s < scalars; s++) {
      const t = tape + 4 * <usize>n * size;
      const l = lambda + <usize>s * size;
      const o = out + <usize>s * outBytes + row;
      if (dephasing != 0) reverse(table + row, t, l, o, sums + <usize>s * 72, work, true);
      else reverse(table + row, t, l, o, sums + <usize>s * 72, work, false);
    }
  }
}

// @ts-ignore: decorator
@inline
function reverse(
  table: usize,
  tape: usize,
  lambda: usize,
  out: usize,
  sums: usize,
  work: usize,
  dephased: bool,
): void {
  const begun = tape;
  const saw = tape + size;
  const was = tape + 2 * size;
  const moved = tape + 3 * size;
  const bySeen = work;
  const byFed = work + size;
  const byChange = work + 2 * size;
  memory.fill(work, 0, 3 * size);
  const second = records + <usize>complex * RECORD;
  const end = second + <usize>hermitian * RECORD;
  const sign = f64x2(-1, 1);
  const traces = f64x2.splat(intoTrace);
  const coherences = f64x2.splat(intoCoherence);
  const opening = f64x2.splat(opened);
  const closing = f64x2.splat(closed);
  const turnLeft = f64x2(-turn, turn);
  const turnRight = f64x2(turn, -turn);
  const seenChange = f64x2.splat(2 * both);
  const re = load<f64>(table, 72);
  const im = load<f64>(table, 80);
  const wr = f64x2.splat(-twice * im);
  const wi = f64x2(-(twice * re), twice * re);
  const xr = f64x2.splat(-decaying * im);
  const xi = f64x2(-(decaying * re), decaying * re);
  const vi = f64x2.neg(wi);
  const zi = f64x2.neg(xi);
  const none = f64x2.splat(0);
  // Sums by the numbers, and by w and x: real parts as products, imaginary ones with one factor swapped. What w and x add to
  // the derivative by the strength of events follows from theirs.
  let dEvent = none;
  let dOpened = none;
  let dClosed = none;
  let dTurn = none;
  let wRe = none;
  let wIm = none;
  let xRe = none;
  let xIm = none;
  // Events on the right.
  for (let at = records; at < second; at += RECORD) {
    const c = <usize>load<u32>(at, 20);
    const d = <usize>load<u32>(at, 24);
    if ((c | d) == 0) continue;
    const own = <usize>load<u32>(at);
    const v = v128.load_splat<f64>(at, 40);
    const p = f64x2.add(v128.load(was + c, 32), f64x2.mul(v, v128.load(was + d, 32)));
    const q = f64x2.add(v128.load(was + c, 48), f64x2.mul(v, v128.load(was + d, 48)));
    const x = v128.load(was + own, 32);
    const b = v128.load(was + own, 48);
    const lt = v128.load(lambda + own, 48);
    const lr = v128.load(lambda + own, 16);
    const bare = f64x2.sub(v128.load(lambda + own), f64x2.mul(sign, swap(lr)));
    if (dephased) {
      const sum = f64x2.add(f64x2.add(x, times(wr, vi, p)), times(xr, zi, b));
      dTurn = f64x2.sub(dTurn, f64x2.mul(lt, f64x2.mul(sign, swap(sum))));
    }
    const t = f64x2.mul(traces, turnedBy(dephased, turnLeft, lt));
    const e = f64x2.mul(coherences, bare);
    dEvent = f64x2.add(dEvent, f64x2.add(f64x2.mul(t, x), f64x2.mul(e, b)));
    wRe = f64x2.add(wRe, f64x2.add(f64x2.mul(p, t), f64x2.mul(q, e)));
    wIm = f64x2.sub(wIm, f64x2.add(f64x2.mul(p, swap(t)), f64x2.mul(q, swap(e))));
    xRe = f64x2.add(xRe, f64x2.mul(b, t));
    xIm = f64x2.sub(xIm, f64x2.mul(b, swap(t)));
    addTo(byFed + own + 32, t);
    addTo(byFed + own + 48, f64x2.add(times(xr, xi, t), e));
    const lp = times(wr, wi, t);
    const lq = times(wr, wi, e);
    addTo(byFed + c + 32, lp);
    addTo(byFed + d + 32, f64x2.mul(v, lp));
    addTo(byFed + c + 48, lq);
    addTo(byFed + d + 48, f64x2.mul(v, lq));
  }
  // Both sides of Hermitian blocks: what is real is carried in the first place.
  for (let at = second; at < end; at += RECORD) {
    const c = <usize>load<u32>(at, 20);
    const d = <usize>load<u32>(at, 24);
    if ((c | d) == 0) continue;
    const own = <usize>load<u32>(at);
    const v = v128.load_splat<f64>(at, 40);
    const gc = f64x2.add(v128.load(moved + c, 16), f64x2.mul(v, v128.load(moved + d, 16)));
    const pre = f64x2.add(v128.load(was + c, 32), f64x2.mul(v, v128.load(was + d, 32)));
    const p = f64x2.sub(f64x2.add(pre, pre), gc);
    const q = f64x2.add(v128.load(was + c, 48), f64x2.mul(v, v128.load(was + d, 48)));
    const b = v128.load(was + own, 48);
    const lt = load<f64>(lambda + own, 48);
    const bare = f64x2(2 * load<f64>(lambda + own), -2 * load<f64>(lambda + own, 16));
    const x = v128.load(was + own, 32);
    const direction = f64x2(lt, turn * lt);
    const open = f64x2.extract_lane(v128.load(moved + c), 0);
    const close = load<f64>(at, 40) * f64x2.extract_lane(v128.load(moved + d), 0);
    if (dephased) {
      const half = f64x2.add(x, times(xr, zi, b));
      const sum = f64x2.add(f64x2.add(half, half), times(wr, vi, p));
      dTurn = f64x2.add(dTurn, f64x2(lt * f64x2.extract_lane(sum, 1), 0));
      dOpened = f64x2.add(dOpened, f64x2(intoTrace * lt * open, 0));
      dClosed = f64x2.add(dClosed, f64x2(intoTrace * lt * close, 0));
    }
    const t = f64x2.mul(traces, direction);
    const e = f64x2.mul(coherences, bare);
    const t2 = f64x2.add(t, t);
    dEvent = f64x2.add(dEvent, f64x2.add(f64x2.mul(t2, x), f64x2.mul(e, b)));
    dEvent = f64x2.add(dEvent, f64x2(intoTrace * lt * (opened * open + closed * close), 0));
    wRe = f64x2.add(wRe, f64x2.add(f64x2.mul(p, t), f64x2.mul(q, e)));
    wIm = f64x2.sub(wIm, f64x2.add(f64x2.mul(p, swap(t)), f64x2.mul(q, swap(e))));
    xRe = f64x2.add(xRe, f64x2.mul(b, t2));
    xIm = f64x2.sub(xIm, f64x2.mul(b, swap(t2)));
    addTo(byFed + own + 32, t2);
    addTo(byFed + own + 48, f64x2.add(times(xr, xi, t2), e));
    const lp = times(wr, wi, t);
    const lq = times(wr, wi, e);
    const lp2 = f64x2.add(lp, lp);
    addTo(byFed + c + 32, lp2);
    addTo(byFed + d + 32, f64x2.mul(v, lp2));
    addTo(byFed + c + 48, lq);
    addTo(byFed + d + 48, f64x2.mul(v, lq));
    addTo(byChange + c + 16, f64x2.neg(lp));
    addTo(byChange + d + 16, f64x2.neg(f64x2.mul(v, lp)));
    const real = f64x2(intoTrace * lt, 0);
    addTo(byChange + c, f64x2.mul(opening, real));
    addTo(byChange + d, f64x2.mul(f64x2.mul(closing, v), real));
  }
  // What events on the left have changed.
  for (let at = records; at < second; at += RECORD) {
    const c = <usize>load<u32>(at, 20);
    const d = <usize>load<u32>(at, 24);
    if ((c | d) == 0) continue;
    const own = <usize>load<u32>(at);
    const v = v128.load_splat<f64>(at, 40);
    const g = f64x2.add(v128.load(byChange + own, 16), v128.load(byFed + own, 32));
    if (dephased) {
      dOpened = f64x2.add(dOpened, f64x2.mul(g, v128.load(moved + c)));
      dClosed = f64x2.add(dClosed, f64x2.mul(f64x2.mul(v, g), v128.load(moved + d)));
    }
    addTo(byChange + c, factored(dephased, opening, g));
    addTo(byChange + d, factored(dephased, closing, f64x2.mul(v, g)));
  }
  // Events on the left.
  for (let at = records; at < second; at += RECORD) {
    const own = <usize>load<u32>(at);
    const a = <usize>load<u32>(at, 12);
    const d = <usize>load<u32>(at, 16);
    const u = v128.load_splat<f64>(at, 32);
    const p = f64x2.add(v128.load(was + a), f64x2.mul(u, v128.load(was + d)));
    const q = f64x2.add(v128.load(was + a, 16), f64x2.mul(u, v128.load(was + d, 16)));
    const x = v128.load(was + own);
    const b = v128.load(was + own, 16);
    const lt = v128.load(lambda + own, 48);
    const lr = v128.load(lambda + own, 16);
    const bare = f64x2.add(
      f64x2.add(v128.load(lambda + own), f64x2.mul(sign, swap(lr))),
      f64x2.mul(seenChange, v128.load(byChange + own)),
    );
    if (dephased) {
      const sum = f64x2.add(f64x2.add(x, times(wr, wi, p)), times(xr, xi, b));
      dTurn = f64x2.add(dTurn, f64x2.mul(lt, f64x2.mul(sign, swap(sum))));
    }
    const t = f64x2.mul(traces, turnedBy(dephased, turnRight, lt));
    const e = f64x2.mul(coherences, bare);
    dEvent = f64x2.add(dEvent, f64x2.add(f64x2.mul(t, x), f64x2.mul(e, b)));
    wRe = f64x2.add(wRe, f64x2.add(f64x2.mul(p, t), f64x2.mul(q, e)));
    wIm = f64x2.add(wIm, f64x2.add(f64x2.mul(p, swap(t)), f64x2.mul(q, swap(e))));
    xRe = f64x2.add(xRe, f64x2.mul(b, t));
    xIm = f64x2.add(xIm, f64x2.mul(b, swap(t)));
    addTo(byFed + own, t);
    addTo(byFed + own + 16, f64x2.add(times(xr, zi, t), e));
    const lp = times(wr, vi, t);
    const lq = times(wr, vi, e);
    addTo(byFed + a, lp);
    addTo(byFed + a + 16, lq);
    if (d == 0) continue;
    addTo(byFed + d, f64x2.mul(u, lp));
    addTo(byFed + d + 16, f64x2.mul(u, lq));
  }
  // Sums over sources.
  const conjugate = f64x2(1, -1);
  for (let at = records; at < end; at += RECORD) {
    const own = <usize>load<u32>(at);
    const c = <usize>load<u32>(at, 20);
    const d = <usize>load<u32>(at, 24);
    const v = v128.load_splat<f64>(at, 40);
    let x = v128.load(byFed + own, 32);
    let b = v128.load(byFed + own, 48);
    const la = v128.load(byFed + own);
    const lb = v128.load(byFed + own, 16);
    if (at >= second) {
      x = f64x2.add(x, f64x2.mul(conjugate, la));
      b = f64x2.add(b, f64x2.mul(conjugate, lb));
    } else {
      const a = <usize>load<u32>(at, 12);
      const f = <usize>load<u32>(at, 16);
      const u = v128.load_splat<f64>(at, 32);
      if (dephased) {
        dOpened = f64x2.add(dOpened, f64x2.mul(la, v128.load(saw + a)));
        dClosed = f64x2.add(dClosed, f64x2.mul(f64x2.mul(u, la), v128.load(saw + f)));
      }
      addTo(bySeen + a, factored(dephased, opening, la));
      addTo(bySeen + a + 32, lb);
      if (f != 0) {
        addTo(bySeen + f, factored(dephased, closing, f64x2.mul(u, la)));
        addTo(bySeen + f + 32, f64x2.mul(u, lb));
      }
    }
    if ((c | d) == 0) continue;
    if (dephased) {
      dOpened = f64x2.add(dOpened, f64x2.mul(x, v128.load(saw + c, 16)));
      dClosed = f64x2.add(dClosed, f64x2.mul(f64x2.mul(v, x), v128.load(saw + d, 16)));
    }
    addTo(bySeen + c + 16, factored(dephased, opening, x));
    addTo(bySeen + d + 16, factored(dephased, closing, f64x2.mul(v, x)));
    addTo(bySeen + c + 32, b);
    addTo(bySeen + d + 32, f64x2.mul(v, b));
  }
  // Rotation, from the blocks that nothing follows back.
  const fx = f64x2.splat(dephasing * im);
  const fy = f64x2.splat(dephasing * re);
  const driven = f64x2.splat(pairDriven * (re * re + im * im));
  const pairs = f64x2.splat(pair);
  const m0 = v128.load_splat<f64>(table);
  const m1 = v128.load_splat<f64>(table, 8);
  const m2 = v128.load_splat<f64>(table, 16);
  const m3 = v128.load_splat<f64>(table, 24);
  const m4 = v128.load_splat<f64>(table, 32);
  const m5 = v128.load_splat<f64>(table, 40);
  const m6 = v128.load_splat<f64>(table, 48);
  const m7 = v128.load_splat<f64>(table, 56);
  const k8 = v128.load_splat<f64>(table, 64);
  const m8 = f64x2.sub(f64x2.splat(1), k8);
  let g0 = none;
  let g1 = none;
  let g2 = none;
  let g3 = none;
  let g4 = none;
  let g5 = none;
  let g6 = none;
  let g7 = none;
  let g8 = none;
  let dPair = none;
  let dDriven = none;
  let dx = none;
  let dy = none;
  let dDamp: f64 = 0;
  for (let at = end - RECORD; at >= records; at -= RECORD) {
    const own = <usize>load<u32>(at);
    const legs = load<u32>(at, 4);
    const f0 = damping + <usize>legs;
    const before = <usize>load<u32>(at, 8);
    const lt = v128.load(lambda + own, 48);
    const ls = v128.load(lambda + own);
    const lr = v128.load(lambda + own, 16);
    const lb = v128.load(lambda + own, 32);
    const la = v128.load(bySeen + own);
    const ld = v128.load(bySeen + own, 16);
    if (before != 0) {
      // The block with one pair less.
      const pa = v128.load(saw + before);
      const pd = v128.load(saw + before, 16);
      const pb = v128.load(saw + before, 32);
      const ps = f64x2.mul(f64x2.splat(0.5), f64x2.add(pa, pd));
      const pr = f64x2.mul(f64x2.mul(f64x2.splat(-0.5), sign), swap(f64x2.sub(pd, pa)));
      const pt = f64x2.mul(v128.load_splat<f64>(f0), v128.load(begun + before, 48));
      dPair = f64x2.add(dPair, f64x2.mul(lt, pb));
      dDriven = f64x2.add(
        dDriven,
        f64x2.sub(
          f64x2.add(f64x2.mul(lb, pb), f64x2.mul(lt, pt)),
          f64x2.add(f64x2.mul(ls, ps), f64x2.mul(lr, pr)),
        ),
      );
      addTo(lambda + before, f64x2.neg(f64x2.mul(driven, ls)));
      addTo(lambda + before + 16, f64x2.neg(f64x2.mul(driven, lr)));
      addTo(lambda + before + 32, f64x2.mul(driven, lb));
      addTo(lambda + before + 48, f64x2.mul(driven, lt));
      addTo(bySeen + before + 32, f64x2.mul(pairs, lt));
    }
    let ss = f64x2.add(ls, f64x2.add(la, ld));
    let rr = f64x2.add(lr, f64x2.mul(sign, swap(f64x2.sub(la, ld))));
    let bb = f64x2.add(lb, v128.load(bySeen + own, 32));
    let tt = lt;
    if (at >= second) {
      const real = f64x2(1, 0);
      ss = f64x2.mul(real, ss);
      rr = f64x2.mul(real, rr);
      bb = f64x2.mul(real, bb);
      tt = f64x2.mul(real, tt);
    }
    const s = v128.load(begun + own);
    const r = v128.load(begun + own, 16);
    const x = v128.load(begun + own, 32);
    const t = v128.load(begun + own, 48);
    const z = f64x2.sub(t, x);
    const e = v128.load_splat<f64>(f0);
    const f = v128.load_splat<f64>(f0, 8);
    const g = v128.load_splat<f64>(f0, 16);
    const te = f64x2.mul(e, t);
    let late = tt;
    if (dephased) {
      dx = f64x2.add(dx, f64x2.mul(ss, te));
      dy = f64x2.add(dy, f64x2.mul(rr, te));
      late = f64x2.add(late, f64x2.add(f64x2.mul(fx, ss), f64x2.mul(fy, rr)));
    }
    const fs = f64x2.mul(f, ss);
    const fr = f64x2.mul(f, rr);
    const gb = f64x2.mul(g, bb);
    const h0 = f64x2.add(f64x2.add(f64x2.mul(m0, s), f64x2.mul(m1, r)), f64x2.mul(m2, z));
    const h1 = f64x2.add(f64x2.add(f64x2.mul(m3, s), f64x2.mul(m4, r)), f64x2.mul(m5, z));
    const h2 = f64x2.sub(
      f64x2.add(f64x2.mul(k8, t), f64x2.mul(m8, x)),
      f64x2.add(f64x2.mul(m6, s), f64x2.mul(m7, r)),
    );
    const all = f64x2.add(
      f64x2.add(f64x2.mul(late, te), f64x2.mul(gb, h2)),
      f64x2.add(f64x2.mul(fs, h0), f64x2.mul(fr, h1)),
    );
    dDamp += <f64>(legs / 24) * total(all);
    g0 = f64x2.add(g0, f64x2.mul(fs, s));
    g1 = f64x2.add(g1, f64x2.mul(fs, r));
    g2 = f64x2.add(g2, f64x2.mul(fs, z));
    g3 = f64x2.add(g3, f64x2.mul(fr, s));
    g4 = f64x2.add(g4, f64x2.mul(fr, r));
    g5 = f64x2.add(g5, f64x2.mul(fr, z));
    g6 = f64x2.sub(g6, f64x2.mul(gb, s));
    g7 = f64x2.sub(g7, f64x2.mul(gb, r));
    g8 = f64x2.sub(g8, f64x2.mul(gb, z));
    const lz = f64x2.add(f64x2.mul(m2, fs), f64x2.mul(m5, fr));
    v128.store(
      lambda + own,
      f64x2.sub(f64x2.add(f64x2.mul(m0, fs), f64x2.mul(m3, fr)), f64x2.mul(m6, gb)),
    );
    v128.store(
      lambda + own,
      f64x2.sub(f64x2.add(f64x2.mul(m1, fs), f64x2.mul(m4, fr)), f64x2.mul(m7, gb)),
      16,
    );
    v128.store(lambda + own, f64x2.sub(f64x2.mul(m8, gb), lz), 32);
    v128.store(lambda + own, f64x2.add(f64x2.add(f64x2.mul(e, late), f64x2.mul(k8, gb)), lz), 48);
  }
  store<f64>(out, total(g0));
  store<f64>(out, total(g1), 8);
  store<f64>(out, total(g2), 16);
  store<f64>(out, total(g3), 24);
  store<f64>(out, total(g4), 32);
  store<f64>(out, total(g5), 40);
  store<f64>(out, total(g6), 48);
  store<f64>(out, total(g7), 56);
  store<f64>(out, total(g8), 64);
  const ur = total(wRe);
  const ui = f64x2.extract_lane(wIm, 0) - f64x2.extract_lane(wIm, 1);
  const vr = total(xRe);
  const vm = f64x2.extract_lane(xIm, 0) - f64x2.extract_lane(xIm, 1);
  const dd = total(dDriven);
  store<f64>(out, twice * ui + decaying * vm + 2 * pairDriven * re * dd + dephasing * total(dy), 72);
  store<f64>(out, 2 * pairDriven * im * dd - twice * ur - decaying * vr + dephasing * total(dx), 80);
  // Re(w*·∂/∂w) + Re(x*·∂/∂x).
  const events = twice * (ui * re - ur * im) + decaying * (vm * re - vr * im);
  gain(sums, total(dEvent) + events);
  gain(sums + 8, total(dPair));
  gain(sums + 16, dd * (re * re + im * im));
  gain(sums + 24, ui * re - ur * im);
  gain(sums + 32, vm * re - vr * im);
  gain(sums + 40, total(dOpened));
  gain(sums + 48, total(dClosed));
  gain(sums + 56, intoTrace * total(dTurn));
  gain(sums + 64, dDamp);
}

function gain(at: usize, x: f64): void {
  store<f64>(at, load<f64>(at) + x);
}
