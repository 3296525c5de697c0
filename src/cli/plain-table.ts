/** A table in columns for the terminal: text left, numbers right, two spaces between. */
export function plainTable(heads: readonly string[], rows: readonly (readonly string[])[]): string {
  const all = [heads, ...rows];
  const widths = heads.map((_, c) => Math.max(...all.map((row) => [...(row[c] ?? '')].length)));
  const numeric = heads.map((_, c) =>
    rows.every((row) => /^[-+]?[\d.]/.test(row[c] ?? '') || ['', '-'].includes(row[c] ?? '')),
  );
  const line = (row: readonly string[]): string =>
    row
      .map((cell, c) => {
        const gap = ' '.repeat((widths[c] as number) - [...cell].length);
        return numeric[c] ? gap + cell : cell + gap;
      })
      .join('  ')
      .trimEnd();
  return [line(heads), line(widths.map((width) => '-'.repeat(width))), ...rows.map(line)].join('\n');
}
