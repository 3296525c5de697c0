import { describe, expect, it } from 'vitest';
import { type Scale, searchLoudest, searchValue } from '../../src/engine/choosing/search-value.ts';
import { PREFERRED_DIGITS } from '../../src/engine/parts/preferred-values.ts';
import { overDecades, seededNumbers } from '../laws/seeded-numbers.ts';

/** Runs a search to its end. */
function finished<Answer>(search: Generator<number, Answer>): Answer {
  for (;;) {
    const step = search.next();
    if (step.done) return step.value;
    expect(step.value).toBeGreaterThan(0);
    expect(step.value).toBeLessThanOrEqual(1);
  }
}

const LOW = 1e-12;
const HIGH = 1e-6;
/** Every E12 value in the range, written out from its digits. */
const E12 = [-12, -11, -10, -9, -8, -7].flatMap((decade) =>
  PREFERRED_DIGITS.E12.map((digits) => Number(`${digits}e${decade - 1}`)),
);
const scale = (members: readonly number[] = E12): Scale => ({
  low: LOW,
  high: HIGH,
  perDecade: 40,
  members,
  zero: false,
});

/** Figures in dB as a value might move them: falling, rising, with a hump, with a dip, with a slow swell. */
function seededFigure(next: () => number): (value: number) => number {
  const corner = overDecades(next(), 1e-11, 1e-7);
  const other = overDecades(next(), 1e-11, 1e-7);
  const height = 3 + 10 * next();
  const kind = Math.floor(5 * next());
  return (value) => {
    const fall = -10 * Math.log10(1 + (value / corner) ** 2);
    const decades = Math.log10(value / other);
    if (kind === 0) return fall;
    if (kind === 1) return -fall;
    if (kind === 2) return 0.3 * fall + height * Math.exp(-2 * decades * decades);
    if (kind === 3) return 0.1 * fall - height * Math.exp(-8 * decades * decades);
    return height * Math.sin(1.5 * decades);
  };
}

describe('one hundred seeded goals', () => {
  it('the chosen member is the best of all, every exact value meets the goal, and each crossing is found', () => {
    const next = seededNumbers(1931);
    let met = 0;
    let several = 0;
    for (let n = 0; n < 100; n++) {
      const figure = seededFigure(next);
      const target = -12 + 24 * next();
      const error = (value: number): number => figure(value) - target;
      const found = finished(searchValue(scale(), { errorAt: error, missAt: (value) => Math.abs(error(value)) }));
      const least = Math.min(...E12.map((value) => Math.abs(error(value))));
      expect(Math.abs(error(found.best as number))).toBe(least);
      // the search ends at 1e-10 of the value, and no figure here is steeper than 100 dB a decade
      for (const value of found.exact) expect(Math.abs(error(value))).toBeLessThan(1e-7);
      // crossings counted on a scale a hundred times finer than that of the search
      let crossings = 0;
      let before = error(LOW);
      for (let k = 1; k <= 24_000; k++) {
        const here = error(overDecades(k / 24_000, LOW, HIGH));
        if (before * here < 0) crossings++;
        before = here;
      }
      expect(found.exact).toHaveLength(crossings);
      if (crossings > 0) met++;
      if (crossings > 1) several++;
    }
    // the seeds hold all three kinds of goal
    expect(met).toBeGreaterThan(30);
    expect(met).toBeLessThan(80);
    expect(several).toBeGreaterThan(10);
  });

  it('the loudest member within a limit is the loudest of all that keep it, and the exact value is no quieter', () => {
    const next = seededNumbers(1924);
    let kept = 0;
    for (let n = 0; n < 100; n++) {
      const level = seededFigure(next);
      const figure = seededFigure(next);
      const bound = -6 + 8 * next();
      const found = finished(
        searchLoudest(scale(), {
          levelAt: (value) => 10 ** (level(value) / 20),
          marginAt: (value) => figure(value) - bound,
          keptAt: (value) => figure(value) >= bound,
        }),
      );
      const within = E12.filter((value) => figure(value) >= bound);
      if (within.length === 0) {
        expect(found.best).toBeNull();
        continue;
      }
      kept++;
      const loudest = Math.max(...within.map(level));
      expect(level(found.best as number)).toBe(loudest);
      expect(level(found.exact as number)).toBeGreaterThanOrEqual(loudest);
      expect(figure(found.exact as number)).toBeGreaterThanOrEqual(bound);
    }
    expect(kept).toBeGreaterThan(60);
  });
});

describe('where a goal can not be met', () => {
  it('the nearest value stands at the end, or at the bend', () => {
    const falling = (value: number): number => -10 * Math.log10(1 + (value / 1e-9) ** 2) - 3;
    const end = finished(searchValue(scale(), { errorAt: falling, missAt: (value) => Math.abs(falling(value)) }));
    expect(end.exact).toEqual([]);
    expect(end.nearest).toBe(LOW);
    const hump = (value: number): number => -1 - Math.log10(value / 3.3e-10) ** 2;
    const bend = finished(searchValue(scale(), { errorAt: hump, missAt: (value) => Math.abs(hump(value)) }));
    expect(bend.exact).toEqual([]);
    // golden section cannot tell values apart closer than the root of the last digit, 1e-8
    expect((bend.nearest as number) / 3.3e-10).toBeCloseTo(1, 5);
  });

  it('two values so close that no point lies between them are both found', () => {
    const touch = (value: number): number => 1e-5 - Math.log10(value / 3.37e-10) ** 2;
    const found = finished(searchValue(scale(), { errorAt: touch, missAt: (value) => Math.abs(touch(value)) }));
    expect(found.exact).toHaveLength(2);
    expect(Math.log10((found.exact[0] as number) / 3.37e-10)).toBeCloseTo(-Math.sqrt(1e-5), 8);
  });

  it('a jump over the goal meets nothing', () => {
    const jump = (value: number): number => (value < 2e-10 ? -1 : 1);
    const found = finished(searchValue(scale(), { errorAt: jump, missAt: (value) => Math.abs(jump(value)) }));
    expect(found.exact).toEqual([]);
  });

  it('a circuit that cannot be at some values is looked at up to the last that can', () => {
    // meets the goal 0.1 % above the value below which it cannot be
    const edge = 3e-10;
    const error = (value: number): number => (value < edge ? Number.NaN : Math.log(value / (1.001 * edge)));
    const found = finished(searchValue(scale(), { errorAt: error, missAt: (value) => Math.abs(error(value)) }));
    expect(found.exact).toHaveLength(1);
    expect((found.exact[0] as number) / edge).toBeCloseTo(1.001, 8);
    const none = finished(searchValue(scale(), { errorAt: () => Number.NaN, missAt: () => Number.POSITIVE_INFINITY }));
    expect(none).toMatchObject({ exact: [], nearest: null, best: null });
  });

  it('0, the part left out, is a value where it may be', () => {
    const error = (value: number): number => value - 0.4e-12;
    const meeting = { errorAt: error, missAt: (value: number): number => Math.abs(error(value)) * 1e12 };
    const found = finished(searchValue({ ...scale([0, 1e-12]), zero: true }, meeting));
    expect(found.exact).toHaveLength(1);
    expect(found.exact[0]).toBeCloseTo(0.4e-12, 20);
    expect(found.best).toBe(0);
  });
});
