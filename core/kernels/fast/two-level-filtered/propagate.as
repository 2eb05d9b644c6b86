/**
 * AssemblyScript: the loops of propagate.ts on complex numbers as vectors of two. Sums are taken in the order of the plain
 * JavaScript twin, so that both give the same bits. All offsets are in bytes.
 */

// A record per block: places of the block, of its damping, of the block with one pair less, of its sources on the left (opening,
// closing) and on the right, then the weights of the closing ones.
const RECORD: usize = 48;
const ROW: usize = 88;

// @ts-ignore: decorator
@inline
function times(re: v128, im: v128, x: v128): v128 {
  return f64x2.add(f64x2.mul(re, x), f64x2.mul(im, v128.shuffle<f64>(x, x, 1, 0)));
}

export function propagate(
  steps: i32,
  table: usize,
  complex: i32,
  hermitian: i32,
  records: usize,
  y: usize,
  seen: usize,
  fed: usize,
  change: usize,
  damping: usize,
  intoTrace: f64,
  intoCoherence: f64,
  pair: f64,
  pairDriven: f64,
  twice: f64,
  decaying: f64,
  dephasing: f64,
  opened: f64,
  closed: f64,
  both: f64,
  turn: f64,
): void {
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
  for (let n = 0; n < steps; n++, table += ROW) {
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
        const ss = f64x2.add(
          f64x2.mul(f, f64x2.add(f64x2.add(f64x2.mul(m0, s), f64x2.mul(m1, r)), f64x2.mul(m2, z))),
          f64x2.mul(vx, te),
        );
        const rr = f64x2.add(
          f64x2.mul(f, f64x2.add(f64x2.add(f64x2.mul(m3, s), f64x2.mul(m4, r)), f64x2.mul(m5, z))),
          f64x2.mul(vy, te),
        );
        const ir = f64x2.mul(sign, v128.shuffle<f64>(rr, rr, 1, 0));
        v128.store(seen + o, f64x2.sub(ss, ir));
        v128.store(seen + o, f64x2.add(ss, ir), 16);
        v128.store(seen + o, b, 32);
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
      v128.store(
        o,
        f64x2.add(f64x2.mul(opening, v128.load(a)), f64x2.mul(f64x2.mul(closing, u), v128.load(b))),
      );
      v128.store(o, f64x2.add(v128.load(a, 32), f64x2.mul(u, v128.load(b, 32))), 16);
      v128.store(
        o,
        f64x2.add(f64x2.mul(opening, v128.load(c, 16)), f64x2.mul(f64x2.mul(closing, v), v128.load(d, 16))),
        32,
      );
      v128.store(o, f64x2.add(v128.load(c, 32), f64x2.mul(v, v128.load(d, 32))), 48);
    }
    const conjugate = f64x2(1, -1);
    for (let i = 0; i < hermitian; i++, at += RECORD) {
      const o = fed + <usize>load<u32>(at);
      const c = seen + <usize>load<u32>(at, 20);
      const d = seen + <usize>load<u32>(at, 24);
      const v = v128.load_splat<f64>(at, 40);
      const x = f64x2.add(f64x2.mul(opening, v128.load(c, 16)), f64x2.mul(f64x2.mul(closing, v), v128.load(d, 16)));
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
      const u = v128.load_splat<f64>(at, 32);
      const p = f64x2.add(v128.load(a), f64x2.mul(u, v128.load(b)));
      const q = f64x2.add(v128.load(a, 16), f64x2.mul(u, v128.load(b, 16)));
      const into = v128.load(o, 16);
      const t = f64x2.mul(traces, f64x2.add(f64x2.add(v128.load(o), times(wr, wi, p)), times(xr, xi, into)));
      const d = f64x2.mul(coherences, f64x2.add(into, times(wr, wi, q)));
      v128.store(change + own, f64x2.mul(seenChange, d));
      const h = y + own;
      v128.store(h, f64x2.add(v128.load(h), d));
      v128.store(h, f64x2.sub(v128.load(h, 16), f64x2.mul(sign, v128.shuffle<f64>(d, d, 1, 0))), 16);
      const turned = f64x2.add(t, f64x2.mul(turnLeft, v128.shuffle<f64>(t, t, 1, 0)));
      v128.store(h, f64x2.add(v128.load(h, 48), turned), 48);
    }
    // Events on the right come after those on the left: what these have changed counts.
    at = records;
    for (let i = 0; i < complex; i++, at += RECORD) {
      const own = <usize>load<u32>(at);
      const c = change + <usize>load<u32>(at, 20);
      const d = change + <usize>load<u32>(at, 24);
      const v = v128.load_splat<f64>(at, 40);
      const g = f64x2.add(
        f64x2.mul(opening, v128.load(c)),
        f64x2.mul(f64x2.mul(closing, v), v128.load(d)),
      );
      v128.store(change + own, g, 16);
      v128.store(fed + own, f64x2.add(v128.load(fed + own, 32), g), 32);
    }
    const vi = f64x2.neg(wi);
    const zi = f64x2.neg(xi);
    at = records;
    for (let i = 0; i < complex; i++, at += RECORD) {
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
      const turned = f64x2.add(t, f64x2.mul(turnRight, v128.shuffle<f64>(t, t, 1, 0)));
      v128.store(h, f64x2.add(v128.load(h, 48), turned), 48);
    }
    // Both sides at once of Hermitian blocks; half of either see what the other has changed.
    const ar = -twice * im;
    const ai = twice * re;
    const cr = -decaying * im;
    const ci = decaying * re;
    at = second;
    for (let i = 0; i < hermitian; i++, at += RECORD) {
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
}
