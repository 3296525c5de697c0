import { onePlainLine } from './plain-line.ts';

/** Fonts that any machine has one of; no font file is referred to. */
const FONTS = "system-ui, 'Segoe UI', Helvetica, Arial, 'Liberation Sans', 'DejaVu Sans', sans-serif";

/** Text colour of the plots, near black. */
export const INK = '#1d2430';

export interface TextStyle {
  readonly size: number;
  readonly anchor?: 'start' | 'middle' | 'end';
  readonly bold?: boolean;
  readonly fill?: string;
}

/** Attributes of the root element that every text inherits. */
export const ROOT_FONT = `font-family="${FONTS}" fill="${INK}"`;

/** Text as it may stand in an XML element or attribute: one line, no character that XML 1.0 forbids, no markup. */
export function escapeXml(text: string): string {
  return onePlainLine(text)
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;')
    .replaceAll("'", '&#39;');
}

/** A coordinate with at most two decimals. */
export function px(value: number): string {
  if (!Number.isFinite(value)) throw new Error(`internal: ${value} as a coordinate of a plot`);
  return String(Math.round(value * 100) / 100 + 0);
}

/** One SVG text element, escaped. */
export function svgText(x: number, y: number, text: string, style: TextStyle): string {
  const anchor = style.anchor === undefined || style.anchor === 'start' ? '' : ` text-anchor="${style.anchor}"`;
  const weight = style.bold === true ? ' font-weight="600"' : '';
  const fill = style.fill === undefined ? '' : ` fill="${style.fill}"`;
  return `<text x="${px(x)}" y="${px(y)}" font-size="${style.size}"${anchor}${weight}${fill}>${escapeXml(text)}</text>`;
}

/** Scripts whose letters are as wide as high. */
const FULL_WIDTH = /[\u1100-\u115f\u2e80-\u9fff\ua960-\ua97f\uac00-\ud7a3\uf900-\ufaff\uff01-\uff60]/u;

/**
 * Width of a text in a common sans-serif font, px, on the wide side: 1.05 of the size for full-width letters and
 * pictures, less for the rest. The figures are estimates, not measured from a font; only where legends break and names
 * are shortened depends on them.
 */
export function textWidth(text: string, size: number): number {
  let widths = 0;
  for (const letter of text) {
    if (/\p{Mn}/u.test(letter)) continue;
    else if (letter.length > 1 || FULL_WIDTH.test(letter)) widths += 1.05;
    else if (/[W@%]/u.test(letter)) widths += 1.06;
    else if (/[MmwΩ]/u.test(letter)) widths += 0.95;
    else if (/[iIjl.,:;'|! ]/u.test(letter)) widths += 0.36;
    else if (/\p{Lu}/u.test(letter)) widths += 0.74;
    else widths += 0.63;
  }
  return widths * size;
}

/**
 * The text, or where it is wider than `limit` px its start and its end around an ellipsis: names of variants differ at
 * the end as often as at the start.
 */
export function fitText(text: string, size: number, limit: number): string {
  const plain = onePlainLine(text);
  if (textWidth(plain, size) <= limit) return plain;
  const letters = Array.from(
    new Intl.Segmenter('en', { granularity: 'grapheme' }).segment(plain),
    ({ segment }) => segment,
  );
  let start = '';
  let end = '';
  for (let from = 0, to = letters.length - 1; from < to; ) {
    const takeStart = textWidth(start, size) <= textWidth(end, size);
    const longer = takeStart ? [start + letters[from++]!, end] : [start, letters[to--]! + end];
    if (textWidth(longer.join('…'), size) > limit) break;
    [start, end] = longer as [string, string];
  }
  return `${start.trimEnd()}…${end.trimStart()}`;
}
