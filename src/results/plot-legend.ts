import { type CurveStyle, drawLineSample } from './plot-curves.ts';
import { drawReadingSample } from './plot-readings.ts';
import { drawTag } from './plot-tags.ts';
import { fitText, svgText, textWidth } from './svg-text.ts';

export interface LegendEntry {
  readonly label: string;
  /** Null: dots, as readings are drawn. */
  readonly style: CurveStyle | null;
  /** The number on the curve; null: none. */
  readonly tag: number | null;
}

const TEXT_SIZE = 13;
const ROW_HEIGHT = 21;
/** Line sample and the gaps beside it. */
const KEY_WIDTH = 54;
const COLUMN_GAP = 22;

/**
 * A legend in as many equal columns as the names allow, read downwards, the top of its first row at `top`.
 *
 * @returns its drawing and its height, px
 */
export function drawLegend(
  entries: readonly LegendEntry[],
  left: number,
  top: number,
  width: number,
): { readonly svg: string; readonly height: number } {
  const least = entries.length <= 3 ? 1 : 2;
  const widestLabel = (width - (least - 1) * COLUMN_GAP) / least - KEY_WIDTH;
  const labels = entries.map((entry) => fitText(entry.label, TEXT_SIZE, widestLabel));
  const columnWidth = Math.max(...labels.map((label) => textWidth(label, TEXT_SIZE))) + KEY_WIDTH + COLUMN_GAP;
  const most = Math.min(entries.length, Math.max(least, Math.floor((width + COLUMN_GAP) / columnWidth)));
  const rows = Math.ceil(entries.length / most);
  const svg = entries.map((entry, i) => {
    const x = left + Math.floor(i / rows) * columnWidth;
    const y = top + (i % rows) * ROW_HEIGHT + ROW_HEIGHT / 2;
    const tag = entry.tag === null || !entry.style ? '' : drawTag(x + 22, y, entry.tag, entry.style);
    const sample = entry.style ? drawLineSample(x, y, entry.style) : drawReadingSample(x, y);
    return sample + tag + svgText(x + KEY_WIDTH, y + 4.5, labels[i]!, { size: TEXT_SIZE });
  });
  return { svg: svg.join('\n'), height: rows * ROW_HEIGHT };
}
