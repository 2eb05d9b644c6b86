/** A stretch of an axis on which a non-negative function is continuous; ends are one-sided values. */
export interface Stretch {
  readonly from: number;
  readonly to: number;
  /** Starting resolution: no feature of the function is narrower than a few of these. */
  readonly step: number;
  readonly value: (x: number) => number;
}

interface Sample {
  readonly x: number;
  readonly y: number;
  readonly stretch: Stretch;
}

const GOLDEN = 0.5 * (Math.sqrt(5) - 1);

/** Largest value near a sampled local maximum, by golden-section search between its neighbours. */
function peakNear(samples: readonly Sample[], i: number): { x: number; y: number } {
  const { stretch } = samples[i];
  let a = i > 0 && samples[i - 1].stretch === stretch ? samples[i - 1].x : samples[i].x;
  let b = i + 1 < samples.length && samples[i + 1].stretch === stretch ? samples[i + 1].x : samples[i].x;
  let best = { x: samples[i].x, y: samples[i].y };
  const probe = (x: number) => {
    const y = stretch.value(x);
    if (y > best.y) best = { x, y };
    return y;
  };
  let c = b - GOLDEN * (b - a);
  let d = a + GOLDEN * (b - a);
  let [yc, yd] = [probe(c), probe(d)];
  // The value at a maximum is known to rounding when its place is known to 1e-8 of the bracket.
  for (let k = 0; k < 40; k++) {
    if (yc > yd) {
      [b, d, yd] = [d, c, yc];
      c = b - GOLDEN * (b - a);
      yc = probe(c);
    } else {
      [a, c, yc] = [c, d, yd];
      d = a + GOLDEN * (b - a);
      yd = probe(d);
    }
  }
  return best;
}

function isPeak(samples: readonly Sample[], i: number): boolean {
  const y = samples[i].y;
  return (i === 0 || samples[i - 1].y <= y) && (i + 1 === samples.length || samples[i + 1].y <= y);
}

function highest(samples: readonly Sample[]): number {
  let top = 0;
  for (const { y } of samples) top = Math.max(top, y);
  let best = top;
  for (let i = 0; i < samples.length; i++) {
    if (samples[i].y > 0.9 * top && isPeak(samples, i)) best = Math.max(best, peakNear(samples, i).y);
  }
  return best;
}

/** Place between low (value below the level) and high (not below it) where the level is crossed, by bisection. */
function root(value: (x: number) => number, low: number, high: number, level: number): number {
  let [a, b] = [low, high];
  for (let i = 0; i < 80; i++) {
    const middle = 0.5 * (a + b);
    if (middle === a || middle === b) break;
    if (value(middle) < level) a = middle;
    else b = middle;
  }
  return b;
}

/** First crossing of the level in the order of the samples. */
function outermost(samples: readonly Sample[], level: number): number {
  for (let i = 0; i < samples.length; i++) {
    const { x, y, stretch } = samples[i];
    let inside = { x, y };
    // A crest that the samples just miss may still reach the level.
    if (y < level && y > 0.9 * level && isPeak(samples, i)) inside = peakNear(samples, i);
    if (inside.y < level) continue;
    const before = i > 0 && samples[i - 1].stretch === stretch ? samples[i - 1].x : x;
    return before === inside.x ? x : root(stretch.value, before, inside.x, level);
  }
  throw new Error('no sample reaches a level taken from the samples themselves');
}

/**
 * Distance between the outermost points at which a function, given on ascending adjacent stretches, reaches half its
 * maximum; jumps between stretches count as crossings. 0 for a function that is zero everywhere.
 */
export function halfMaximumWidth(stretches: readonly Stretch[]): number {
  const samples: Sample[] = [];
  for (const stretch of stretches) {
    const { from, to, value } = stretch;
    const count = Math.max(1, Math.ceil((to - from) / stretch.step));
    for (let i = 0; i <= count; i++) {
      const x = i === count ? to : from + ((to - from) * i) / count;
      samples.push({ x, y: value(x), stretch });
    }
  }
  const half = 0.5 * highest(samples);
  if (!(half > 0)) return 0;
  const left = outermost(samples, half);
  const right = outermost(samples.reverse(), half);
  return right - left;
}
