/**
 * AssemblyScript: the inner loops of tower-system.ts on two numbers at a time. Sums are taken in the order of the plain
 * JavaScript twin, so that both give the same bits. All offsets are in bytes.
 */

/** term = what counting, damping and rotation of blocks give, the same in every storey; zero elsewhere. */
export function count(
  storeys: i32,
  storeyBytes: i32,
  targets: i32,
  target: usize,
  first: usize,
  source: usize,
  weight: usize,
  y: usize,
  term: usize,
): void {
  memory.fill(term, 0, <usize>(storeys * storeyBytes));
  for (let s = 0; s < storeys; s++) {
    for (let i = 0; i < targets; i++) {
      const end = load<i32>(first + (((<usize>i) + 1) << 2));
      let sum: f64 = 0;
      for (let k = load<i32>(first + ((<usize>i) << 2)); k < end; k++) {
        sum += load<f64>(weight + ((<usize>k) << 3)) * load<f64>(y + <usize>load<i32>(source + ((<usize>k) << 2)));
      }
      store<f64>(term + <usize>load<i32>(target + ((<usize>i) << 2)), sum);
    }
    y += <usize>storeyBytes;
    term += <usize>storeyBytes;
  }
}

/** term = factor·(term + links, decay and generator applied to y); sum += term. Eight lanes at a time. */
export function addTerm(
  storeys: i32,
  size: i32,
  stride: i32,
  damping: usize,
  first: usize,
  source: usize,
  weight: usize,
  rowStart: usize,
  column: usize,
  value: usize,
  y: usize,
  term: usize,
  factor: f64,
  sum: usize,
): void {
  const scale = f64x2.splat(factor);
  let own = y;
  for (let s = 0; s < storeys; s++) {
    const d = f64x2.splat(-load<f64>(damping + ((<usize>s) << 3)));
    for (let r = 0; r < size; r++) {
      const begin = load<i32>(first);
      const end = load<i32>(first, 4);
      const ownBegin = load<i32>(rowStart + ((<usize>r) << 2));
      const ownEnd = load<i32>(rowStart + ((<usize>r) << 2), 4);
      first += 4;
      const row = own + <usize>(r * stride);
      for (let g = 0; g < stride; g += 64) {
        const at = row + <usize>g;
        let a0 = f64x2.add(v128.load(term), f64x2.mul(d, v128.load(at)));
        let a1 = f64x2.add(v128.load(term, 16), f64x2.mul(d, v128.load(at, 16)));
        let a2 = f64x2.add(v128.load(term, 32), f64x2.mul(d, v128.load(at, 32)));
        let a3 = f64x2.add(v128.load(term, 48), f64x2.mul(d, v128.load(at, 48)));
        const group = y + <usize>g;
        for (let k = begin; k < end; k++) {
          const f = v128.load_splat<f64>(weight + ((<usize>k) << 3));
          const from = group + <usize>load<i32>(source + ((<usize>k) << 2));
          a0 = f64x2.add(a0, f64x2.mul(f, v128.load(from)));
          a1 = f64x2.add(a1, f64x2.mul(f, v128.load(from, 16)));
          a2 = f64x2.add(a2, f64x2.mul(f, v128.load(from, 32)));
          a3 = f64x2.add(a3, f64x2.mul(f, v128.load(from, 48)));
        }
        const storey = own + <usize>g;
        for (let k = ownBegin; k < ownEnd; k++) {
          const f = v128.load_splat<f64>(value + ((<usize>k) << 3));
          const from = storey + <usize>load<i32>(column + ((<usize>k) << 2));
          a0 = f64x2.add(a0, f64x2.mul(f, v128.load(from)));
          a1 = f64x2.add(a1, f64x2.mul(f, v128.load(from, 16)));
          a2 = f64x2.add(a2, f64x2.mul(f, v128.load(from, 32)));
          a3 = f64x2.add(a3, f64x2.mul(f, v128.load(from, 48)));
        }
        a0 = f64x2.mul(a0, scale);
        a1 = f64x2.mul(a1, scale);
        a2 = f64x2.mul(a2, scale);
        a3 = f64x2.mul(a3, scale);
        v128.store(term, a0);
        v128.store(term, a1, 16);
        v128.store(term, a2, 32);
        v128.store(term, a3, 48);
        v128.store(sum, f64x2.add(v128.load(sum), a0));
        v128.store(sum, f64x2.add(v128.load(sum, 16), a1), 16);
        v128.store(sum, f64x2.add(v128.load(sum, 32), a2), 32);
        v128.store(sum, f64x2.add(v128.load(sum, 48), a3), 48);
        term += 64;
        sum += 64;
      }
    }
    own += <usize>(size * stride);
  }
}
