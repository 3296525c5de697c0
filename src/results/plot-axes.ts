import { scaleLinear, scaleLog } from 'd3-scale';
import { px, svgText } from './svg-text.ts';

/** A rectangle of the drawing, px. */
export interface Area {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
}

/** What a decibel axis spans: both ends are multiples of half the step between its lines. */
export interface DecibelRange {
  readonly low: number;
  readonly high: number;
  readonly step: number;
}

/** A panel with its two scales, values to px. */
export interface Panel {
  readonly area: Area;
  readonly range: DecibelRange;
  readonly x: (hertz: number) => number;
  readonly y: (decibels: number) => number;
}

const LOWEST_HERTZ = 20;
const HIGHEST_HERTZ = 20_000;
const LABELLED_HERTZ = [20, 50, 100, 200, 500, 1000, 2000, 5000, 10_000, 20_000];

const GRID = { minor: '#e8ebf0', labelled: '#ccd2db', decade: '#a3acb9', zero: '#4b5666', frame: '#7a8595' } as const;

/**
 * The span of a decibel axis: from the data, at least `least` and at most `most`, with a step that leaves at most
 * `mostSteps` between its ends.
 */
export function decibelRange(
  values: readonly number[],
  least: { readonly low: number; readonly high: number },
  most: { readonly low: number; readonly high: number },
  mostSteps: number,
): DecibelRange {
  const low = Math.max(
    most.low,
    values.reduce((a, b) => Math.min(a, b), least.low),
  );
  const high = Math.min(
    most.high,
    values.reduce((a, b) => Math.max(a, b), least.high),
  );
  const step = [1, 2, 3, 6, 10].find((candidate) => (high - low) / candidate <= mostSteps) ?? 20;
  return { low: (Math.floor((2 * low) / step) * step) / 2, high: (Math.ceil((2 * high) / step) * step) / 2, step };
}

/** A panel on the common frequency axis of 20 Hz to 20 kHz, logarithmic. */
export function makePanel(area: Area, range: DecibelRange): Panel {
  const right = area.left + area.width;
  const bottom = area.top + area.height;
  const x = scaleLog().domain([LOWEST_HERTZ, HIGHEST_HERTZ]).range([area.left, right]);
  const y = scaleLinear().domain([range.low, range.high]).range([bottom, area.top]);
  return { area, range, x: (hertz) => x(hertz), y: (decibels) => y(decibels) };
}

/** The grid, frame and labels of a panel. `minusThree` adds the line by which corners are read. */
export function drawAxes(
  panel: Panel,
  options: { readonly frequencyLabels: boolean; readonly minusThree: boolean; readonly axisTitle: string },
): string {
  const { area, range, x, y } = panel;
  const right = area.left + area.width;
  const bottom = area.top + area.height;
  const parts: string[] = [];
  for (const hertz of gridHertz()) {
    const colour = isDecade(hertz) ? GRID.decade : LABELLED_HERTZ.includes(hertz) ? GRID.labelled : GRID.minor;
    parts.push(gridLine(x(hertz), area.top, x(hertz), bottom, colour, 1));
  }
  for (let n = Math.ceil(range.low / range.step); n * range.step <= range.high; n++) {
    const decibels = n * range.step;
    const markedAnyway = decibels === 0 || (decibels === -3 && options.minusThree);
    if (!markedAnyway) parts.push(gridLine(area.left, y(decibels), right, y(decibels), GRID.labelled, 1));
    const label = decibels < 0 ? `−${-decibels}` : String(decibels);
    parts.push(svgText(area.left - 8, y(decibels) + 4, label, { size: 12, anchor: 'end' }));
  }
  parts.push(gridLine(area.left, y(0), right, y(0), GRID.zero, 1.6));
  if (options.minusThree) {
    parts.push(gridLine(area.left, y(-3), right, y(-3), GRID.zero, 1.2, '6 4'));
    parts.push(svgText(right + 8, y(-3) + 4, '−3 dB', { size: 12 }));
    parts.push(svgText(right + 8, y(0) + 4, '0 dB', { size: 12 }));
  }
  parts.push(
    `<rect x="${px(area.left)}" y="${px(area.top)}" width="${px(area.width)}" height="${px(area.height)}" ` +
      `fill="none" stroke="${GRID.frame}"/>`,
    svgText(area.left - 8, area.top - 10, options.axisTitle, { size: 12, anchor: 'end' }),
  );
  if (options.frequencyLabels) parts.push(drawFrequencyLabels(panel));
  return parts.join('\n');
}

function drawFrequencyLabels({ area, x }: Panel): string {
  const bottom = area.top + area.height;
  const labels = LABELLED_HERTZ.map((hertz) =>
    svgText(x(hertz), bottom + 18, hertz < 1000 ? String(hertz) : `${hertz / 1000}k`, { size: 12, anchor: 'middle' }),
  );
  return [...labels, svgText(area.left + area.width + 22, bottom + 18, 'Hz', { size: 12 })].join('\n');
}

function gridHertz(): number[] {
  const all = [10, 100, 1000, 10_000].flatMap((decade) => [1, 2, 3, 4, 5, 6, 7, 8, 9].map((n) => n * decade));
  return all.filter((hertz) => hertz >= LOWEST_HERTZ && hertz <= HIGHEST_HERTZ);
}

function isDecade(hertz: number): boolean {
  return hertz === 100 || hertz === 1000 || hertz === 10_000;
}

function gridLine(x1: number, y1: number, x2: number, y2: number, stroke: string, width: number, dash = ''): string {
  const dashes = dash === '' ? '' : ` stroke-dasharray="${dash}"`;
  return (
    `<line x1="${px(x1)}" y1="${px(y1)}" x2="${px(x2)}" y2="${px(y2)}" ` +
    `stroke="${stroke}" stroke-width="${width}"${dashes}/>`
  );
}
