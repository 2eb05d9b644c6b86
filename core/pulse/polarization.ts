/** cos and sin of the polarisation; 6e-17 instead of 0 along an axis would couple what must stay dark. */
export function polarizationWeights(angle: number): readonly [number, number] {
  const snap = (x: number): number => (Math.abs(x) < 1e-15 ? 0 : x);
  return [snap(Math.cos(angle)), snap(Math.sin(angle))];
}
