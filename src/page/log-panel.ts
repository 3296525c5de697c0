import type { Area, DecibelRange } from '../results/plot-axes.ts';
import { px } from '../results/svg-text.ts';

/** The common frequency axis, Hz. */
export const AXIS_HERTZ = [20, 20_000] as const;

/** A panel: frequencies on a logarithmic axis, decibels on a straight one; values to px. */
export interface LogPanel {
  readonly area: Area;
  readonly range: DecibelRange;
  readonly x: (hertz: number) => number;
  readonly y: (decibels: number) => number;
}

export function logPanel(area: Area, range: DecibelRange): LogPanel {
  const [low, high] = AXIS_HERTZ;
  return {
    area,
    range,
    x: (hertz) => area.left + (area.width * Math.log(hertz / low)) / Math.log(high / low),
    y: (decibels) => area.top + (area.height * (range.high - decibels)) / (range.high - range.low),
  };
}

/** The frequency under a place of the axis, Hz; `share` 0 to 1 across. */
export function hertzOfShare(share: number): number {
  const [low, high] = AXIS_HERTZ;
  return low * (high / low) ** Math.max(0, Math.min(1, share));
}

/**
 * Path data through points that ascend across: a cubic without overshoot, straight beyond the ends (M. Steffen, A simple
 * method for monotonic interpolation in one dimension, Astron. Astrophys. 239, 1990, from memory).
 */
export function smoothPath(points: readonly (readonly [x: number, y: number])[]): string {
  const first = points[0];
  if (!first) return '';
  const slopes = points.map((_, k) => slopeAt(points, k));
  const pieces = points.slice(1).map(([x, y], k) => {
    const [x0, y0] = points[k] as readonly [number, number];
    const third = (x - x0) / 3;
    const from = y0 + third * (slopes[k] as number);
    const to = y - third * (slopes[k + 1] as number);
    return `C${px(x0 + third)} ${px(from)} ${px(x - third)} ${px(to)} ${px(x)} ${px(y)}`;
  });
  return `M${px(first[0])} ${px(first[1])}${pieces.join('')}`;
}

function slopeAt(points: readonly (readonly [number, number])[], k: number): number {
  const secant = (n: number): number => {
    const [a, b] = [points[n], points[n + 1]];
    return a && b ? (b[1] - a[1]) / (b[0] - a[0]) : Number.NaN;
  };
  const [before, after] = [secant(k - 1), secant(k)];
  if (Number.isNaN(before) || Number.isNaN(after))
    return Number.isNaN(before) ? (Number.isNaN(after) ? 0 : after) : before;
  const width = (n: number): number =>
    (points[n + 1] as readonly [number, number])[0] - (points[n] as readonly [number, number])[0];
  const [h0, h1] = [width(k - 1), width(k)];
  const mean = (before * h1 + after * h0) / (h0 + h1);
  const sign = Math.sign(before) + Math.sign(after);
  return sign * Math.min(Math.abs(before), Math.abs(after), 0.5 * Math.abs(mean));
}
