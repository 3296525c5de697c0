import { expect, it } from 'vitest';
import { anyCharacters, spoiltLists } from './list-slips.ts';
import { anyBytes, damagedFiles } from './wav-damage.ts';
import { roundTrips, twoColumnTables, writtenValues } from './written-slips.ts';

it('10,000 damaged WAV files, and as many of any bytes, are read or refused', () => {
  const { read, refused } = damagedFiles(10_000, 41);
  expect(Math.min(read, refused)).toBeGreaterThan(1000);
  anyBytes(10_000, 42);
});

it('10,000 spoilt parts lists, and 2,000 of any characters, are read or refused', () => {
  const { read, refused } = spoiltLists(10_000, 43);
  expect(Math.min(read, refused)).toBeGreaterThan(600);
  anyCharacters(2000, 44);
});

it('20,000 written values and 10,000 tables are read or refused, and 10,000 values read back', () => {
  expect(Math.min(...Object.values(writtenValues(20_000, 45)))).toBeGreaterThan(1000);
  roundTrips(10_000, 46);
  expect(Math.min(...Object.values(twoColumnTables(10_000, 47)))).toBeGreaterThan(1000);
});
