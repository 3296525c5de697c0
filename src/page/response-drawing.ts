import { COST_PARTS } from '../results/cost-parts.ts';
import { type Area, decibelRange } from '../results/plot-axes.ts';
import type { MeasuredRecord, VariantResult } from '../results/result.ts';
import { escapeXml, px } from '../results/svg-text.ts';
import { hertzOfShare, type LogPanel, logPanel, smoothPath } from './log-panel.ts';

/** What the response drawing shows. */
export interface ResponseView {
  readonly variants: readonly VariantResult[];
  /** Which of them is selected; its cost is drawn below. */
  readonly selected: number;
  readonly unit: 'decibels' | 'volts';
  readonly markedHertz: number;
  readonly measured: MeasuredRecord | null;
  /** Width of the drawing, px. */
  readonly width: number;
}

const LEFT = 46;
const RIGHT = 14;
const RESPONSE_HEIGHT = 300;
const COST_HEIGHT = 130;
const GAP = 44;
const HERTZ_LABELS = [20, 50, 100, 200, 500, 1000, 2000, 5000, 10_000, 20_000];

/** Colours, and dashes, of the page's lines. */
const STYLES = 8;

/** Classes of a variant's line: colour and dashes are paired anew every eight, so that no two of 64 are alike. */
export function lineClass(index: number): string {
  const round = Math.floor(index / STYLES);
  return `hue-${(index % STYLES) + 1} dash-${((index + round) % STYLES) + 1}`;
}

interface CurvePoint {
  readonly hertz: number;
  readonly decibels: number;
}

/** The frequency under a place across the drawing, px. */
export function hertzAt(x: number, width: number): number {
  return hertzOfShare((x - LEFT) / (width - LEFT - RIGHT));
}

/** All responses, and below on the same frequencies the cost by part of the selected variant. */
export function responseDrawing(view: ResponseView): string {
  const { variants, width, unit, measured } = view;
  const series = variants.map((variant) => levels(variant, unit));
  const values = [...series, ...(measured && unit === 'decibels' ? [measured.points] : [])].flatMap((points) =>
    points.map(({ decibels }) => decibels),
  );
  const top = unit === 'decibels' ? { low: -6, high: 3 } : { low: Math.max(...values) - 6, high: Math.max(...values) };
  const range = decibelRange(values, top, { low: Math.max(...values) - 60, high: Math.max(...values) + 6 }, 8);
  const response = logPanel(area(24, RESPONSE_HEIGHT, width), range);
  const shown = variants[view.selected];
  const costs = shown ? COST_PARTS.flatMap(({ key }) => shown.response.map((row) => row.cost[key])) : [0];
  const costTop = 24 + RESPONSE_HEIGHT + GAP;
  const cost = logPanel(
    area(costTop, COST_HEIGHT, width),
    decibelRange(costs, { low: 0, high: 3 }, { low: -20, high: 60 }, 5),
  );
  const height = costTop + COST_HEIGHT + 26;
  return [
    `<svg class="response" viewBox="0 0 ${px(width)} ${height}" role="img" aria-label="${escapeXml(described(view))}">`,
    axes(response, unit),
    axes(cost, 'decibels'),
    caption(
      LEFT,
      14,
      unit === 'decibels' ? 'Audio at the output, dB re 400 Hz' : 'Audio at the output at 30 % modulation',
    ),
    caption(LEFT, costTop - 10, `Cost by part, dB: ${shown?.name ?? ''}`),
    marker(response, cost, view.markedHertz),
    ...series.map((points, k) => curve(points, response, lineClass(k), k === view.selected)),
    measured && unit === 'decibels' ? dots(measured, response) : '',
    ...(shown
      ? COST_PARTS.map(({ key }, k) =>
          curve(
            shown.response.map((row) => ({ hertz: row.hertz, decibels: row.cost[key] })),
            cost,
            `cost-${k + 1}`,
            false,
          ),
        )
      : []),
    ...tags(series, response),
    '</svg>',
  ].join('');
}

function area(top: number, height: number, width: number): Area {
  return { left: LEFT, top, width: width - LEFT - RIGHT, height };
}

function levels(variant: VariantResult, unit: ResponseView['unit']): CurvePoint[] {
  return variant.response.map((row) => ({
    hertz: row.hertz,
    decibels: unit === 'decibels' ? row.decibels : 20 * Math.log10(Math.max(row.voltsRmsAt30Percent, 1e-9)),
  }));
}

function axes(panel: LogPanel, unit: ResponseView['unit']): string {
  const { area: at, range, x, y } = panel;
  const [right, bottom] = [at.left + at.width, at.top + at.height];
  const lines: string[] = [];
  const labels: string[] = [];
  for (const decade of [10, 100, 1000, 10_000]) {
    for (let n = 1; n < 10; n++) {
      const hertz = n * decade;
      if (hertz < 20 || hertz > 20_000) continue;
      lines.push(
        `<path class="${n === 1 ? 'grid strong' : 'grid'}" d="M${px(x(hertz))} ${px(at.top)}V${px(bottom)}"/>`,
      );
    }
  }
  for (const hertz of HERTZ_LABELS) {
    if (at.width < 420 && ![20, 100, 1000, 10_000].includes(hertz)) continue;
    labels.push(tick(x(hertz), bottom + 17, hertz < 1000 ? `${hertz}` : `${hertz / 1000}k`, 'middle'));
  }
  for (let n = Math.ceil(range.low / range.step); n * range.step <= range.high + 1e-9; n++) {
    const level = n * range.step;
    lines.push(
      `<path class="${level === 0 ? 'grid strong' : 'grid'}" d="M${px(at.left)} ${px(y(level))}H${px(right)}"/>`,
    );
    labels.push(tick(at.left - 6, y(level) + 4, unit === 'decibels' ? signed(level) : volts(level), 'end'));
  }
  return `<g>${lines.join('')}<rect class="frame" x="${px(at.left)}" y="${px(at.top)}" width="${px(at.width)}" height="${px(at.height)}"/>${labels.join('')}</g>`;
}

const signed = (level: number): string => (level < 0 ? `−${-level}` : `${level}`);

function volts(level: number): string {
  const value = 10 ** (level / 20);
  const [scaled, unit] = value >= 1 ? [value, ''] : value >= 1e-3 ? [value * 1e3, 'm'] : [value * 1e6, 'µ'];
  return `${Number(scaled.toPrecision(2))}${unit}`;
}

function tick(x: number, y: number, text: string, anchor: string): string {
  return `<text class="tick" x="${px(x)}" y="${px(y)}" text-anchor="${anchor}">${escapeXml(text)}</text>`;
}

function caption(x: number, y: number, text: string): string {
  return `<text class="caption" x="${px(x)}" y="${px(y)}">${escapeXml(text)}</text>`;
}

/** A curve, cut where it leaves its panel by a picture of the panel's own. */
function curve(points: readonly CurvePoint[], panel: LogPanel, name: string, strong: boolean): string {
  const { left, top, width, height } = panel.area;
  const path = smoothPath(points.map(({ hertz, decibels }) => [panel.x(hertz), panel.y(decibels)] as const));
  const box = `${px(left)} ${px(top)} ${px(width)} ${px(height)}`;
  return (
    `<svg x="${px(left)}" y="${px(top)}" width="${px(width)}" height="${px(height)}" viewBox="${box}">` +
    `<path class="curve ${name}${strong ? ' selected' : ''}" d="${path}"/></svg>`
  );
}

function dots({ points }: MeasuredRecord, panel: LogPanel): string {
  const { range, x, y } = panel;
  return points
    .filter(({ hertz, decibels }) => hertz >= 20 && hertz <= 20_000 && decibels >= range.low && decibels <= range.high)
    .map(({ hertz, decibels }) => `<circle class="measured" cx="${px(x(hertz))}" cy="${px(y(decibels))}" r="3.4"/>`)
    .join('');
}

function marker(response: LogPanel, cost: LogPanel, hertz: number): string {
  const x = px(response.x(hertz));
  const line = ({ area: at }: LogPanel): string =>
    `<path class="marker" d="M${x} ${px(at.top)}V${px(at.top + at.height)}"/>`;
  return line(response) + line(cost);
}

/** The number of each variant on its curve, spread along the axis so that they stand apart. */
function tags(series: readonly (readonly CurvePoint[])[], panel: LogPanel): string[] {
  if (series.length < 2) return [];
  return series.map((points, k) => {
    const places = points.filter(({ decibels }) => decibels > panel.range.low && decibels < panel.range.high);
    const upper = places.filter(({ hertz }) => hertz >= 1000);
    const from = upper.length > 0 ? upper : places;
    const point = from[Math.floor(((k + 0.5) / series.length) * from.length)];
    if (!point) return '';
    const [x, y] = [panel.x(point.hertz), panel.y(point.decibels)];
    return `<circle class="tag" cx="${px(x)}" cy="${px(y)}" r="9"/><text class="tag" x="${px(x)}" y="${px(y + 4)}" text-anchor="middle">${k + 1}</text>`;
  });
}

function described({ variants, markedHertz }: ResponseView): string {
  const figures = variants.map((variant) => {
    const row = variant.response.find((one) => one.hertz === markedHertz);
    return row ? `${variant.name} ${row.decibels.toFixed(1)} dB` : variant.name;
  });
  return `Response over frequency. At ${markedHertz} Hz: ${figures.join(', ')}. The table below has all figures.`;
}
