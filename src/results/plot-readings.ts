import type { Panel } from './plot-axes.ts';
import type { CurvePoint } from './plot-curves.ts';
import { px } from './svg-text.ts';

/** Readings are drawn black, as dots: no curve has either. */
const READING = { fill: '#1a1f27', radius: 2.6 } as const;

/** Measured points within a panel, one dot each. */
export function drawReadings(points: readonly CurvePoint[], { area, range, x, y }: Panel): string {
  const dots = points
    .filter(({ decibels }) => decibels >= range.low && decibels <= range.high)
    .map(({ hertz, decibels }) => ({ x: x(hertz), y: y(decibels) }))
    .filter((dot) => dot.x >= area.left && dot.x <= area.left + area.width)
    .map((dot) => `<circle cx="${px(dot.x)}" cy="${px(dot.y)}" r="${READING.radius}"/>`);
  return `<g data-measured="1" fill="${READING.fill}">${dots.join('')}</g>`;
}

/** Three dots as they stand in a legend, centred on `y`. */
export function drawReadingSample(x: number, y: number): string {
  const dots = [6, 22, 38].map((step) => `<circle cx="${px(x + step)}" cy="${px(y)}" r="${READING.radius}"/>`);
  return `<g fill="${READING.fill}">${dots.join('')}</g>`;
}
