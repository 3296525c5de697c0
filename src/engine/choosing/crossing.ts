/**
 * The place between two values of opposite sign where a continuous function is zero: inverse quadratic steps guarded by
 * halving (R. P. Brent, Algorithms for Minimization without Derivatives, 1973, chapter 4, from memory).
 *
 * @param tolerance  width of the interval at which it ends, absolute
 * @returns          the place; NaN where the function has no number on the way
 */
export function crossing(
  of: (x: number) => number,
  from: number,
  to: number,
  atFrom: number,
  atTo: number,
  tolerance: number,
): number {
  let [a, b, fa, fb] = [from, to, atFrom, atTo];
  let [c, fc] = [a, fa];
  let step = b - a;
  let last = step;
  for (let pass = 0; pass < 200; pass++) {
    if (Math.sign(fb) === Math.sign(fc)) {
      [c, fc] = [a, fa];
      step = b - a;
      last = step;
    }
    if (Math.abs(fc) < Math.abs(fb)) {
      [a, b, c] = [b, c, b];
      [fa, fb, fc] = [fb, fc, fb];
    }
    const least = 2 * Number.EPSILON * Math.abs(b) + 0.5 * tolerance;
    const half = 0.5 * (c - b);
    if (Math.abs(half) <= least || fb === 0) return b;
    if (Math.abs(last) < least || Math.abs(fa) <= Math.abs(fb)) {
      step = half;
      last = half;
    } else {
      const s = fb / fa;
      let p = 2 * half * s;
      let q = 1 - s;
      if (a !== c) {
        const t = fa / fc;
        const r = fb / fc;
        p = s * (2 * half * t * (t - r) - (b - a) * (r - 1));
        q = (t - 1) * (r - 1) * (s - 1);
      }
      if (p > 0) q = -q;
      p = Math.abs(p);
      if (2 * p < Math.min(3 * half * q - Math.abs(least * q), Math.abs(last * q))) {
        last = step;
        step = p / q;
      } else {
        step = half;
        last = half;
      }
    }
    a = b;
    fa = fb;
    b += Math.abs(step) > least ? step : Math.sign(half) * least;
    fb = of(b);
    if (!Number.isFinite(fb)) return Number.NaN;
  }
  return b;
}

/** Part of an interval that golden section keeps. */
const GOLDEN = (Math.sqrt(5) - 1) / 2;

/**
 * The lowest point of a function with one valley between two places, by golden section. Where there is no number the
 * function counts as high.
 *
 * @param enough  ends the search early: a value this low is all that is wanted
 */
export function lowest(
  of: (x: number) => number,
  from: number,
  to: number,
  tolerance: number,
  enough = Number.NEGATIVE_INFINITY,
): { readonly x: number; readonly value: number } {
  const high = (value: number): number => (Number.isNaN(value) ? Number.POSITIVE_INFINITY : value);
  let [a, b] = [from, to];
  let left = b - GOLDEN * (b - a);
  let right = a + GOLDEN * (b - a);
  let [atLeft, atRight] = [high(of(left)), high(of(right))];
  while (Math.abs(b - a) > tolerance && Math.min(atLeft, atRight) > enough) {
    if (atLeft <= atRight) {
      b = right;
      [right, atRight] = [left, atLeft];
      left = b - GOLDEN * (b - a);
      atLeft = high(of(left));
    } else {
      a = left;
      [left, atLeft] = [right, atRight];
      right = a + GOLDEN * (b - a);
      atRight = high(of(right));
    }
  }
  return atLeft <= atRight ? { x: left, value: atLeft } : { x: right, value: atRight };
}

/** Halves between a place where something holds and one where it does not; returns the last at which it holds. */
export function lastThatHolds(
  holds: (x: number) => boolean,
  inside: number,
  outside: number,
  tolerance: number,
): number {
  let [good, bad] = [inside, outside];
  while (Math.abs(bad - good) > tolerance) {
    const middle = 0.5 * (good + bad);
    if (holds(middle)) good = middle;
    else bad = middle;
  }
  return good;
}
