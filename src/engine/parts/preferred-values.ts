/** A series of preferred values by its IEC 60063 name. */
export type PreferredSeries = 'E6' | 'E12' | 'E24';

/**
 * The two-digit members of one decade, IEC 60063. They are a table and no formula: eight members of E24
 * (27 30 33 36 39 43 47 82) are not the rounded geometric steps.
 * Source: IEC 60063 as printed at https://www.qsl.net/g4usp/Components/Component%20preferred%20values.htm (seen).
 */
export const PREFERRED_DIGITS: Readonly<Record<PreferredSeries, readonly number[]>> = {
  E6: [10, 15, 22, 33, 47, 68],
  E12: [10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82],
  E24: [10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91],
};

/** Values that differ by less than this part are one marked value: rounding of decimal text is 1e-16. */
const SAME = 1e-9;

/**
 * The `index`-th value of a series, counted from 1 (index 0) up and down through the decades: E12 index −1 is 0.82.
 * The value is read from decimal text, so 47 nF is exactly 4.7e-8.
 */
export function preferredValue(index: number, series: PreferredSeries): number {
  const digits = PREFERRED_DIGITS[series];
  const decade = Math.floor(index / digits.length);
  return Number(`${digits[index - decade * digits.length]!}e${decade - 1}`);
}

/** Index of the largest member not above `value` (above 0), a member within 1e-9 counting as itself. */
function indexAtOrBelow(value: number, series: PreferredSeries): number {
  const perDecade = PREFERRED_DIGITS[series].length;
  let index = Math.floor(Math.log10(value) * perDecade);
  while (preferredValue(index, series) > value * (1 + SAME)) index--;
  while (preferredValue(index + 1, series) <= value * (1 + SAME)) index++;
  return index;
}

/** Whether a value (above 0) is a member of the series. */
export function isPreferred(value: number, series: PreferredSeries): boolean {
  return preferredValue(indexAtOrBelow(value, series), series) >= value * (1 - SAME);
}

/** The largest member below `value` (above 0); a member's own neighbour, never itself. */
export function preferredBelow(value: number, series: PreferredSeries): number {
  const index = indexAtOrBelow(value, series);
  return preferredValue(isPreferred(value, series) ? index - 1 : index, series);
}

/** The smallest member above `value` (above 0); a member's own neighbour, never itself. */
export function preferredAbove(value: number, series: PreferredSeries): number {
  return preferredValue(indexAtOrBelow(value, series) + 1, series);
}

/** The member nearest in ratio to `value` (above 0), the lower of two equally near. */
export function nearestPreferred(value: number, series: PreferredSeries): number {
  const index = indexAtOrBelow(value, series);
  const low = preferredValue(index, series);
  const high = preferredValue(index + 1, series);
  return value / low <= high / value ? low : high;
}

/**
 * The member `steps` up (positive) or down (negative) from `value` (above 0). From between two members the first step goes to
 * the neighbour in that direction; 0 steps give the nearest member.
 */
export function stepPreferred(value: number, steps: number, series: PreferredSeries): number {
  if (steps === 0) return nearestPreferred(value, series);
  const index = indexAtOrBelow(value, series);
  const from = steps < 0 && !isPreferred(value, series) ? index + 1 : index;
  return preferredValue(from + steps, series);
}
