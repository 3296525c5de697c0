import { describe, expect, it } from 'vitest';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { InputError } from '../../src/engine/errors.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { said, seededCases } from './seeded-cases.ts';
import { circuitOf, expectWithinLimits, type ToneCase, tonePair } from './tone-pair.ts';

const tables = new TableStore();

/**
 * Circuits that miss a limit today, by their number; each is expected to, so that one mended and one spoilt both show.
 * Hardly any bypass at more than 0.1 V, the second harmonic 11 and 31 % off where 10 % is allowed (the plate's
 * second carrier harmonic is not carried).
 */
const OUTSIDE_STIFF = new Set([62, 160]);

function judge(c: ToneCase): void {
  const pair = tonePair(c, tables);
  if (pair.doubts.length === 0) expectWithinLimits(c, pair);
  else expect(Math.abs(pair.decibels)).toBeLessThan(1);
}

describe('renderer against the integration of every carrier cycle, 200 seeded circuits', () => {
  seededCases(2, 200, 'stiff').forEach((c, k) => {
    it(`${k + 1}: ${said(c)}`, { fails: OUTSIDE_STIFF.has(k + 1) }, () => judge(c));
  });
});

describe('the same with a coil as built, 60 seeded circuits', () => {
  seededCases(3, 60, 'coil').forEach((c, k) => {
    it(`${k + 1}: ${said(c)}`, () => {
      // A stage that would oscillate is refused before anything is rendered: that is its answer.
      try {
        restPoint(circuitOf(c));
      } catch (error) {
        expect(error).toBeInstanceOf(InputError);
        return;
      }
      judge(c);
    });
  });
});
