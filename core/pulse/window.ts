/** Interval of one tone on the time axis of the pulse, ps, with its discontinuities. */
export interface PlacedWindow {
  readonly start: number;
  readonly end: number;
  readonly edges: readonly number[];
}

/** Share of a tone's own window by which it may be widened to meet a breakpoint that is there anyway. */
const SNAP = 0.25;

/** Moves the soft ends of a window outwards onto an end of another window nearby, which saves short segments. */
function snapped(window: PlacedWindow, all: readonly PlacedWindow[]): PlacedWindow {
  const room = SNAP * (window.end - window.start);
  let { start, end } = window;
  for (const other of all) {
    if (!window.edges.includes(window.start) && other.start < start && window.start - other.start <= room) {
      start = other.start;
    }
    if (!window.edges.includes(window.end) && other.end > end && other.end - window.end <= room) {
      end = other.end;
    }
  }
  return { start, end, edges: window.edges };
}

/** The time axis of a pulse, cut into segments. */
export interface Segments {
  /** Ascending, ps. */
  readonly breakpoints: Float64Array;
  /** `active[segment·n + k]` is 1 where tone k of n acts. */
  readonly active: Uint8Array;
}

const alone = ({ start, end }: PlacedWindow): Segments => ({
  breakpoints: Float64Array.of(start, end),
  active: Uint8Array.of(1),
});

/**
 * Union of the windows, cut at every end and discontinuity. Which tones act is decided per segment, so that one-sided
 * values at edges are right.
 */
export function segments(windows: readonly PlacedWindow[]): Segments {
  if (windows.length === 1 && windows[0].edges.length === 0) return alone(windows[0]);
  const placed = windows.map((window) => snapped(window, windows));
  const times = new Set<number>();
  for (const { start, end, edges } of placed) for (const time of [start, end, ...edges]) times.add(time);
  const breakpoints = Float64Array.from(times).sort();
  const count = placed.length;
  const active = new Uint8Array((breakpoints.length - 1) * count);
  for (let s = 0; s + 1 < breakpoints.length; s++) {
    for (let k = 0; k < count; k++) {
      if (placed[k].start <= breakpoints[s] && placed[k].end >= breakpoints[s + 1]) active[s * count + k] = 1;
    }
  }
  return { breakpoints, active };
}
