/** Reflection at the bounds: a triangle wave that maps the line onto [0, 1]. */
export function fold(u: number): number {
  const within = Math.abs(u) % 2;
  return within > 1 ? 2 - within : within;
}
