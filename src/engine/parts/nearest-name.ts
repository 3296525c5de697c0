/**
 * The known name most like what was typed, or null when none is near: at most a third of the letters may differ,
 * counting a swap of neighbours, a missing, a wrong or an extra letter as one each. Case, spaces, hyphens do not count.
 */
export function nearestName(typed: string, known: readonly string[]): string | null {
  const plain = (name: string): string => name.toLowerCase().replace(/[\s\-_/]/g, '');
  const wanted = plain(typed);
  let best: string | null = null;
  let least = Number.POSITIVE_INFINITY;
  for (const name of known) {
    const other = plain(name);
    const distance = editDistance(wanted, other);
    if (distance < least && distance <= Math.max(1, Math.floor(Math.max(wanted.length, other.length) / 3))) {
      least = distance;
      best = name;
    }
  }
  return best;
}

/** Fewest single-letter edits and neighbour swaps that turn `a` into `b` (optimal string alignment). */
function editDistance(a: string, b: string): number {
  let beforeLast: number[] = [];
  let last = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      let cost = Math.min(last[j]! + 1, row[j - 1]! + 1, last[j - 1]! + (a[i - 1] === b[j - 1] ? 0 : 1));
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1])
        cost = Math.min(cost, beforeLast[j - 2]! + 1);
      row.push(cost);
    }
    beforeLast = last;
    last = row;
  }
  return last[b.length]!;
}
