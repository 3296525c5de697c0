import { describe, expect, it } from 'vitest';
import { anyCharacters, BASES, judge, spoiltLists } from './list-slips.ts';

describe('a spoilt parts list', () => {
  it('the unspoilt ones are read', () => {
    expect(BASES.map((base) => judge(base, []))).toEqual(['read', 'read', 'read']);
  });

  it('is read, or refused with its faults, always', () => {
    const seen = spoiltLists(500, 20);
    // both ends of the property are met, each many times
    expect(Math.min(seen.read, seen.refused)).toBeGreaterThan(30);
  });

  it('of any characters is read or refused as well', () => {
    anyCharacters(100, 21);
  });
});
