/** How a figure lies over the circuits. Infinite where it was not reached: a high corner above all, a low one below all. */
export interface Distribution {
  /** Of those reached; null where none was. */
  readonly mean: number | null;
  readonly least: number;
  readonly low5: number;
  readonly median: number;
  readonly high95: number;
  readonly most: number;
}

/**
 * Quantiles and mean of a sample, 1 value or more, infinite ones allowed.
 *
 * Quantiles are interpolated between the sorted values at (n − 1)·p: type 7 of R. J. Hyndman and Y. Fan, Sample quantiles
 * in statistical packages, The American Statistician 50, 1996 (from memory).
 */
export function distributionOf(values: readonly number[]): Distribution {
  const sorted = Float64Array.from(values).sort();
  const finite = values.filter(Number.isFinite);
  return {
    mean: finite.length === 0 ? null : finite.reduce((sum, value) => sum + value, 0) / finite.length,
    least: quantile(sorted, 0),
    low5: quantile(sorted, 0.05),
    median: quantile(sorted, 0.5),
    high95: quantile(sorted, 0.95),
    most: quantile(sorted, 1),
  };
}

/** @param sorted  ascending, 1 value or more */
export function quantile(sorted: ArrayLike<number>, share: number): number {
  const at = (sorted.length - 1) * share;
  const below = sorted[Math.floor(at)] as number;
  const above = sorted[Math.ceil(at)] as number;
  // between an infinite value and another there is no middle
  if (!Number.isFinite(below) || !Number.isFinite(above)) return at - Math.floor(at) < 0.5 ? below : above;
  return below + (above - below) * (at - Math.floor(at));
}

/** Variance of a sample about its mean, divided by n: 0 for one value. */
export function varianceOf(values: readonly number[]): number {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  return values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / values.length;
}
