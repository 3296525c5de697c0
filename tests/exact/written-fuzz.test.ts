import { expect, it } from 'vitest';
import { roundTrips, twoColumnTables, writtenValues } from './written-slips.ts';

it('any text is a finite value or a fault', () => {
  const { read, refused } = writtenValues(1500, 31);
  // both must occur often, else nothing is tried
  expect(Math.min(read, refused)).toBeGreaterThan(100);
});

it('what is written out reads back', () => {
  roundTrips(600, 32);
});

it('a table of two columns is read with finite rows or refused', () => {
  const { read, refused } = twoColumnTables(600, 33);
  expect(Math.min(read, refused)).toBeGreaterThan(60);
});
