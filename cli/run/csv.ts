/** A cell: numbers in full double precision, absent values empty. */
export type Cell = number | string | null;

function cellText(cell: Cell): string {
  if (cell === null) return '';
  // The shortest text that reads back as the same double.
  if (typeof cell === 'number') return Number.isFinite(cell) ? String(cell) : '';
  return /[",\n\r]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell;
}

/** Text of a table: comment lines with `#`, one line of column names, then the rows. */
export function csv(
  comments: readonly string[],
  columns: readonly string[],
  rows: readonly (readonly Cell[])[],
): string {
  const lines = [
    ...comments.map((comment) => `# ${comment.replace(/[\r\n]+/g, ' ')}`),
    columns.map(cellText).join(','),
    ...rows.map((row) => row.map(cellText).join(',')),
  ];
  return `${lines.join('\n')}\n`;
}
