import { describe, expect, it } from 'vitest';
import { chunk, riff } from './wav-crafting.ts';
import { anyBytes, BASES, damagedFiles, readsOrRefuses } from './wav-damage.ts';

describe('damaged WAV files are read with finite samples or refused with a named fault', () => {
  it('2000 files with one to four damages', () => {
    const outcomes = damagedFiles(2000, 20_261);
    // both must occur often, else the damages test nothing
    expect(outcomes.read).toBeGreaterThan(200);
    expect(outcomes.refused).toBeGreaterThan(200);
  });

  it('500 files of any bytes', () => {
    anyBytes(500, 20_262);
  });

  it('every start of every base file', () => {
    for (const base of BASES) for (let n = 0; n < base.length; n++) readsOrRefuses(base.slice(0, n));
  });

  it('a long run of empty chunks ends', () => {
    const empty = Array.from({ length: 20_000 }, () => chunk('void', []));
    expect(readsOrRefuses(riff(...empty))).toBe('refused');
  });
});
