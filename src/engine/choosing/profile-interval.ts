import { leastSquares, type Residuals, type Settled } from './least-squares.ts';

/** Steps of the walk in parts of the interval that straight slopes give, and how often a step is halved at its end. */
const FIRST_STEP = 0.4;
const LONGER = 1.3;
const MOST_STEPS = 24;
const HALVINGS = 7;

/**
 * One end of an interval where slopes alone mislead, because values can be traded for one another or the valley bends:
 * one coordinate is moved away from the place of least squares, the others follow as well as they can, until the sum
 * passes a limit (D. M. Bates and D. G. Watts, Nonlinear Regression Analysis, 1988, chapter 6, from memory).
 *
 * @param coordinate  which one is walked along
 * @param reach       half width of the interval by straight slopes, signed by the way to go
 * @param most        limit of the sum
 * @returns           the coordinate at the limit, or ±infinity where the box ends first
 */
export function profileEnd(
  residuals: Residuals,
  from: Settled,
  coordinate: number,
  reach: number,
  most: number,
): number {
  const low = residuals.low[coordinate] as number;
  const high = residuals.high[coordinate] as number;
  const start = from.place[coordinate] as number;
  let at = start;
  let others = without(from.place, coordinate);
  let step = FIRST_STEP * reach;
  let beyond: number | null = null;
  for (let k = 0; k < MOST_STEPS && beyond === null; k++) {
    const next = at + step;
    if (next <= low || next >= high) return Math.sign(reach) * Number.POSITIVE_INFINITY;
    const best = heldAt(residuals, coordinate, next, others);
    if (best && best.sum <= most) {
      at = next;
      others = best.place;
      step *= LONGER;
    } else beyond = next;
  }
  if (beyond === null) return Math.sign(reach) * Number.POSITIVE_INFINITY;
  let outside: number = beyond;
  for (let halving = 0; halving < HALVINGS; halving++) {
    const middle: number = 0.5 * (at + outside);
    const best = heldAt(residuals, coordinate, middle, others);
    if (best && best.sum <= most) {
      at = middle;
      others = best.place;
    } else outside = middle;
  }
  return 0.5 * (at + outside);
}

/** Least squares in the other coordinates, one held. */
function heldAt(
  residuals: Residuals,
  coordinate: number,
  value: number,
  others: Float64Array,
): { readonly place: Float64Array; readonly sum: number } | null {
  const whole = (place: Float64Array): Float64Array => {
    const full = new Float64Array(place.length + 1);
    full.set(place.subarray(0, coordinate));
    full[coordinate] = value;
    full.set(place.subarray(coordinate), coordinate + 1);
    return full;
  };
  return leastSquares(
    {
      at: (place) => residuals.at(whole(place)),
      low: without(residuals.low, coordinate),
      high: without(residuals.high, coordinate),
    },
    others,
  );
}

function without(place: Float64Array, coordinate: number): Float64Array {
  return place.filter((_, k) => k !== coordinate);
}
