import type { Panel } from './plot-axes.ts';
import type { CurvePoint, CurveStyle } from './plot-curves.ts';
import { px } from './svg-text.ts';

/** Two tags nearer than this, px, would touch. */
const TAG_DISTANCE = 19;
/** From here on, px, another curve no longer runs into a tag. */
const CURVE_DISTANCE = 14;

/** Where a tag stands, px. */
export interface TagPlace {
  readonly x: number;
  readonly y: number;
}

/** The number by which a curve is found in the legend, in a ring of the curve's colour. */
export function drawTag(x: number, y: number, number: number, style: CurveStyle): string {
  return (
    `<circle cx="${px(x)}" cy="${px(y)}" r="7.5" fill="#ffffff" stroke="${style.colour}" stroke-width="1.5"/>` +
    `<text x="${px(x)}" y="${px(y + 3.4)}" font-size="9.5" text-anchor="middle">${number}</text>`
  );
}

/**
 * The point of each curve that carries its number: clear of the tags placed before, then clear of the other curves,
 * then spread along the frequencies from 1 kHz up, where detectors differ.
 *
 * @returns one place a curve, or null when no point of the curve is within the range
 */
export function tagPlaces(curves: readonly (readonly CurvePoint[])[], panel: Panel): (TagPlace | null)[] {
  const placed: TagPlace[] = [];
  return curves.map((points, own) => {
    const wantedX = panel.x(1000) + ((panel.x(16_000) - panel.x(1000)) * (own + 0.5)) / curves.length;
    let best: TagPlace | null = null;
    let highest = Number.NEGATIVE_INFINITY;
    for (const point of points) {
      if (point.decibels < panel.range.low || point.decibels > panel.range.high) continue;
      const place = { x: panel.x(point.hertz), y: panel.y(point.decibels) };
      const toTags = Math.min(TAG_DISTANCE, ...placed.map((tag) => Math.hypot(tag.x - place.x, tag.y - place.y)));
      const score =
        4 * toTags + 2 * clearance(curves, own, point, panel) - 20 * (Math.abs(place.x - wantedX) / panel.area.width);
      if (score > highest) {
        highest = score;
        best = place;
      }
    }
    if (best !== null) placed.push(best);
    return best;
  });
}

/** Distance to the nearest other curve at a point's frequency, px, at most `CURVE_DISTANCE`. */
function clearance(curves: readonly (readonly CurvePoint[])[], own: number, point: CurvePoint, panel: Panel): number {
  let nearest = CURVE_DISTANCE;
  for (const [i, points] of curves.entries()) {
    const other = i === own ? undefined : points.find((candidate) => candidate.hertz === point.hertz);
    if (other !== undefined) nearest = Math.min(nearest, Math.abs(panel.y(other.decibels) - panel.y(point.decibels)));
  }
  return nearest;
}
