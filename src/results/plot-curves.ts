import { curveMonotoneX, line } from 'd3-shape';
import type { Panel } from './plot-axes.ts';
import { px } from './svg-text.ts';

/** How one curve is told from the others: by colour, by dashes and, where it has one, by the number on it. */
export interface CurveStyle {
  readonly colour: string;
  /** SVG dash list; empty: a full line. */
  readonly dash: string;
}

/**
 * Eight colours and eight dash lists, paired so that 24 curves differ in at least one, and in dashes before colours
 * repeat. The colours are our own: the set of random candidates with the largest smallest distance in CIELAB (30 or
 * more), seen with full colour sight and with protanopia, deuteranopia and tritanopia simulated after Machado,
 * Oliveira and Fernandes (IEEE Trans. Vis. Comput. Graph. 15, 2009, matrices from memory), all at 3:1 contrast or more
 * against white.
 */
const COLOURS = ['#0c2fac', '#dc780d', '#359ba7', '#a0000e', '#967be6', '#4e2768', '#b28a68', '#7e2e44'] as const;
const DASHES = ['', '9 4', '3 3', '12 4 3 4', '16 5', '7 3 2 3 2 3', '5 2', '14 3 5 3'] as const;

/** Colours and dashes of the four cost curves, chosen in the same way. */
export const COST_STYLES: readonly CurveStyle[] = [
  { colour: '#059cae', dash: '9 4' },
  { colour: '#2f148f', dash: '' },
  { colour: '#d9560d', dash: '3 3' },
  { colour: '#58201c', dash: '12 4 3 4' },
];

/** The style of variant `index`, counted from 0; no two of 64 are alike. */
export function variantStyle(index: number): CurveStyle {
  const round = Math.floor(index / COLOURS.length);
  return { colour: COLOURS[index % COLOURS.length]!, dash: DASHES[(index + round) % DASHES.length]! };
}

export interface CurvePoint {
  readonly hertz: number;
  readonly decibels: number;
}

/**
 * Path data of a curve through the points, smooth without overshoot, ended where it leaves the panel's decibel range.
 * Points must ascend in frequency. Empty when nothing of it lies within.
 */
export function curvePath(points: readonly CurvePoint[], panel: Panel): string {
  const path = line<CurvePoint | null>()
    .defined((point) => point !== null)
    .x((point) => panel.x(point!.hertz))
    .y((point) => panel.y(point!.decibels))
    .curve(curveMonotoneX)
    .digits(2);
  return path(withinRange(points, panel)) ?? '';
}

/** The points within the range, with the crossings of its ends put in and `null` where the curve is outside. */
function withinRange(points: readonly CurvePoint[], { range }: Panel): (CurvePoint | null)[] {
  const kept: (CurvePoint | null)[] = [];
  const inside = (p: CurvePoint): boolean => p.decibels >= range.low && p.decibels <= range.high;
  for (const [i, point] of points.entries()) {
    const before = points[i - 1];
    if (before !== undefined && !(inside(before) && inside(point))) {
      const crossings = [range.low, range.high]
        .filter((edge) => (before.decibels - edge) * (point.decibels - edge) < 0)
        .map((edge) => crossing(before, point, edge))
        .sort((a, b) => a.hertz - b.hertz);
      // from outside to outside across the whole range there are two, otherwise one
      if (!inside(before)) kept.push(null);
      kept.push(...crossings);
    }
    if (inside(point)) kept.push(point);
    else kept.push(null);
  }
  return kept;
}

/** Where the straight line between two points over the logarithm of frequency meets a level. */
function crossing(a: CurvePoint, b: CurvePoint, decibels: number): CurvePoint {
  const part = (decibels - a.decibels) / (b.decibels - a.decibels);
  return { hertz: a.hertz * (b.hertz / a.hertz) ** part, decibels };
}

/** A curve as a path element; `attributes` names what it belongs to. */
export function drawCurve(points: readonly CurvePoint[], panel: Panel, style: CurveStyle, attributes: string): string {
  const dash = style.dash === '' ? '' : ` stroke-dasharray="${style.dash}"`;
  return (
    `<path ${attributes} d="${curvePath(points, panel)}" fill="none" stroke="${style.colour}" ` +
    `stroke-width="2.2" stroke-linejoin="round"${dash}/>`
  );
}

/** A piece of line as it stands in a legend, 44 px long, centred on `y`. */
export function drawLineSample(x: number, y: number, style: CurveStyle): string {
  const dash = style.dash === '' ? '' : ` stroke-dasharray="${style.dash}"`;
  return `<line x1="${px(x)}" y1="${px(y)}" x2="${px(x + 44)}" y2="${px(y)}" stroke="${style.colour}" stroke-width="2.2"${dash}/>`;
}
