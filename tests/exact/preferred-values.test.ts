import { describe, expect, it } from 'vitest';
import {
  isPreferred,
  nearestPreferred,
  PREFERRED_DIGITS,
  preferredAbove,
  preferredBelow,
  preferredValue,
  stepPreferred,
} from '../../src/engine/parts/preferred-values.ts';

describe('preferred values, IEC 60063', () => {
  // https://www.qsl.net/g4usp/Components/Component%20preferred%20values.htm (seen)
  it('has the printed members', () => {
    expect(PREFERRED_DIGITS.E6.join(' ')).toBe('10 15 22 33 47 68');
    expect([...PREFERRED_DIGITS.E6, 12, 18, 27, 39, 56, 82].sort((a, b) => a - b)).toEqual(PREFERRED_DIGITS.E12);
    const added = [11, 13, 16, 20, 24, 30, 36, 43, 51, 62, 75, 91];
    expect([...PREFERRED_DIGITS.E12, ...added].sort((a, b) => a - b)).toEqual(PREFERRED_DIGITS.E24);
  });

  it('is no formula: eight members of E24 are not the rounded geometric steps', () => {
    const off = PREFERRED_DIGITS.E24.filter((digits, i) => digits !== Math.round(10 * 10 ** (i / 24)));
    expect(off).toEqual([27, 30, 33, 36, 39, 43, 47, 82]);
  });

  it('counts through the decades', () => {
    expect(preferredValue(0, 'E12')).toBe(1);
    expect(preferredValue(-1, 'E12')).toBe(0.82);
    expect(preferredValue(12, 'E12')).toBe(10);
    expect(preferredValue(-40, 'E6')).toBe(2.2e-7);
    expect(preferredValue(8 - 12 * 8, 'E12')).toBe(4.7e-8);
  });

  it.each([
    [100e-12, 'E12', 120e-12, 82e-12],
    [105e-12, 'E12', 120e-12, 100e-12],
    [2.2e6, 'E6', 3.3e6, 1.5e6],
    [1, 'E24', 1.1, 0.91],
    [9.9, 'E24', 10, 9.1],
    [0.1 + 0.2, 'E24', 0.33, 0.27],
  ] as const)('%d in %s has the neighbours %d and %d', (value, series, above, below) => {
    expect(preferredAbove(value, series)).toBe(above);
    expect(preferredBelow(value, series)).toBe(below);
  });

  it.each([
    [96e-12, 'E12', 100e-12],
    [4.6, 'E24', 4.7],
    [30e3, 'E6', 33e3],
    [Math.sqrt(3.3 * 4.7) * 0.999, 'E6', 3.3],
    [Math.sqrt(3.3 * 4.7) * 1.001, 'E6', 4.7],
  ] as const)('%d in %s is nearest to %d', (value, series, nearest) => {
    expect(nearestPreferred(value, series)).toBe(nearest);
  });

  it('steps up and down from a member and from between two', () => {
    expect(stepPreferred(100e-12, 1, 'E12')).toBe(120e-12);
    expect(stepPreferred(100e-12, -2, 'E12')).toBe(68e-12);
    expect(stepPreferred(105e-12, 1, 'E12')).toBe(120e-12);
    expect(stepPreferred(105e-12, -1, 'E12')).toBe(100e-12);
    expect(stepPreferred(105e-12, 0, 'E12')).toBe(100e-12);
  });

  it('knows every member of twelve decades, and none between', () => {
    for (const series of ['E6', 'E12', 'E24'] as const) {
      for (let index = -200; index < 200; index++) {
        const value = preferredValue(index, series);
        expect(isPreferred(value, series)).toBe(true);
        expect(isPreferred(value * 1.02, series)).toBe(false);
        expect(nearestPreferred(value, series)).toBe(value);
        expect(preferredBelow(preferredAbove(value, series), series)).toBe(value);
      }
    }
  });
});
