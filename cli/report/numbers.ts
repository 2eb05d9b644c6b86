/** Three significant digits, as a physicist writes them: 0.604, 1.23e-4, 1250. */
export function threeDigits(value: number | null): string {
  if (value === null || !Number.isFinite(value)) return '–';
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size < 1e-3 || size >= 1e5) return value.toExponential(2).replace('e+', 'e');
  const plain = Number(value.toPrecision(3));
  const decimals = Math.max(0, 2 - Math.floor(Math.log10(Math.abs(plain))));
  return plain.toFixed(decimals);
}

/** Time in words: 42 s, 3 min 10 s, 2 h 5 min. */
export function duration(seconds: number): string {
  if (!Number.isFinite(seconds)) return '–';
  if (seconds < 10) return `${seconds.toFixed(1)} s`;
  const whole = Math.round(seconds);
  if (whole < 60) return `${whole} s`;
  if (whole < 3600) return `${Math.floor(whole / 60)} min ${whole % 60} s`;
  return `${Math.floor(whole / 3600)} h ${Math.floor((whole % 3600) / 60)} min`;
}
