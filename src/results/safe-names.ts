import { onePlainLine } from './plain-line.ts';

/** Longest stem, bytes of UTF-8: leaves room for an ending and for deep folders on every file system. */
const LONGEST_STEM_BYTES = 80;

/** Device names that Windows reserves with any ending (Microsoft, Naming Files, Paths, and Namespaces, from memory). */
const DEVICE = /^(con|prn|aux|nul|conin\$|conout\$|clock\$|(com|lpt)[0-9¹²³])$/;

/** Stems of the other files of a result folder. */
const TAKEN = new Set(['result', 'response', 'listening']);

/**
 * One file stem (no ending) for each variant's name, in the same order, safe on Windows, macOS and Linux.
 *
 * A stem keeps the name's letters as far as it can: path separators, wildcards and quotes become `-`; leading dots and
 * hyphens, device names and the result folder's own stems get `_` in front; trailing dots and spaces go; it is at most
 * 80 bytes of UTF-8, cut between whole characters. A stem that another would meet on a file system blind to case or to
 * composition gets ` (2)`, ` (3)`, … The same names always give the same stems.
 */
export function safeFileNames(names: readonly string[]): string[] {
  const used = new Set<string>();
  return names.map((name) => {
    const stem = safeStem(name);
    let unique = stem;
    for (let n = 2; used.has(folded(unique)); n++) {
      const suffix = ` (${n})`;
      unique = tidyEnd(cutToBytes(stem, LONGEST_STEM_BYTES - suffix.length)) + suffix;
    }
    used.add(folded(unique));
    return unique;
  });
}

function safeStem(name: string): string {
  let stem = onePlainLine(name)
    .replace(/[<>:"/\\|?*\ufffd]/gu, '-')
    .trim();
  stem = tidyEnd(stem);
  if (stem === '') stem = 'variant';
  if (/^[.\-~]/u.test(stem) || isReserved(stem)) stem = `_${stem}`;
  return tidyEnd(cutToBytes(stem, LONGEST_STEM_BYTES));
}

/** Windows drops dots and spaces at the end of a name. */
function tidyEnd(stem: string): string {
  return stem.replace(/[.\s]+$/u, '');
}

/** What stands before the first dot decides: `con.txt` is the console too. */
function isReserved(stem: string): boolean {
  const base = folded(stem.split('.')[0] ?? '').trim();
  return DEVICE.test(base) || TAKEN.has(base);
}

/** One form for all spellings that some file system takes for the same name. */
function folded(stem: string): string {
  return stem.normalize('NFKC').toUpperCase().toLowerCase().normalize('NFKC');
}

/** The longest start of `text` within `limit` bytes of UTF-8 that ends between characters as they are read. */
function cutToBytes(text: string, limit: number): string {
  if (utf8Bytes(text) <= limit) return text;
  const clusters = Array.from(new Intl.Segmenter('en', { granularity: 'grapheme' }).segment(text), (s) => s.segment);
  const cut = longestStart(clusters, limit);
  // one cluster of very many combining marks: between code points then
  return cut === '' ? longestStart(Array.from(text), limit) : cut;
}

function longestStart(pieces: readonly string[], limit: number): string {
  let cut = '';
  let bytes = 0;
  for (const piece of pieces) {
    bytes += utf8Bytes(piece);
    if (bytes > limit) break;
    cut += piece;
  }
  return cut;
}

function utf8Bytes(text: string): number {
  return new TextEncoder().encode(text).length;
}
