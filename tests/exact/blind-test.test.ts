import { describe, expect, it } from 'vitest';
import {
  countCorrect,
  guessProbability,
  type Hidden,
  hiddenSequence,
  leastConvincing,
} from '../../src/engine/measure/blind-test.ts';
import { blindWords } from '../../src/page/blind-words.ts';
import { seededNumbers } from '../laws/seeded-numbers.ts';

describe('the probability of guessing', () => {
  // exact binomial tail P(X >= k | n, 1/2), calculated apart to six decimals, hence half a unit of the sixth;
  // 11 and 12 of 16 also as "90 %" and "96 %" in http://www.hydrogenaudio.org/forums/lofiversion/index.php/t1558.html (seen)
  it.each([
    [8, 10, 0.054688],
    [9, 10, 0.010742],
    [10, 10, 0.000977],
    [10, 12, 0.019287],
    [11, 16, 0.105057],
    [12, 16, 0.038406],
    [13, 16, 0.010635],
    [14, 20, 0.057659],
    [15, 20, 0.020695],
    [18, 25, 0.021643],
  ])('%i of %i', (correct, trials, probability) => {
    expect(Math.abs(guessProbability(correct, trials) - probability)).toBeLessThan(0.5e-6 + 1e-12);
  });

  it('is that of counted sequences, every one of them', () => {
    for (let trials = 1; trials <= 12; trials++) {
      const counts = new Array<number>(trials + 1).fill(0);
      for (let code = 0; code < 2 ** trials; code++) {
        const ones = code.toString(2).replaceAll('0', '').length;
        for (let k = 0; k <= ones; k++) counts[k] = counts[k]! + 1;
      }
      counts.forEach((count, k) => {
        // whole numbers over a power of two: exact
        expect(guessProbability(k, trials)).toBe(count / 2 ** trials);
      });
      expect(guessProbability(trials + 1, trials)).toBe(0);
    }
  });

  it('asks for as many right answers as the printed table', () => {
    // minimum correct for 95 %, n = 10 to 25: https://www.liquisearch.com/abx_test/confidence (seen)
    const printed = [9, 9, 10, 10, 11, 12, 12, 13, 13, 14, 15, 15, 16, 16, 17, 18];
    expect(printed.map((_, k) => leastConvincing(10 + k))).toEqual(printed);
    // by the exact tail, for 10, 20 … 100 trials; calculated apart
    const tens = [9, 15, 20, 26, 32, 37, 43, 48, 54, 59];
    expect(tens.map((_, k) => leastConvincing(10 * (k + 1)))).toEqual(tens);
    expect(leastConvincing(4)).toBe(null);
  });
});

describe('a test', () => {
  it('gives whoever always names the first about half right', () => {
    const runs = 200;
    const trials = 16;
    const random = seededNumbers(20_260_101);
    let right = 0;
    const seen = new Set<string>();
    for (let n = 0; n < runs; n++) {
      const hidden = hiddenSequence(trials, random);
      seen.add(hidden.join());
      right += countCorrect(hidden, new Array<Hidden>(trials).fill('first'));
    }
    // half of 3200, within four standard deviations (√(3200/4) = 28.3): one seed in 16,000 would miss it
    expect(Math.abs(right - (runs * trials) / 2)).toBeLessThan(4 * 28.3);
    // 200 of 65,536 sequences: hardly two alike
    expect(seen.size).toBeGreaterThan(190);
  });

  it('draws each trial apart from the one before', () => {
    const hidden = hiddenSequence(4000, seededNumbers(7));
    const same = hidden.filter((one, n) => n > 0 && one === hidden[n - 1]).length;
    // half of 3999, four standard deviations of 31.6
    expect(Math.abs(same - 1999.5)).toBeLessThan(4 * 31.6);
  });

  it('says in words what the score means', () => {
    expect(blindWords(12, 16)).toEqual({
      score: '12 of 16 right',
      probability: '0.038406',
      meaning: 'Guessing does as well in one of 26 tests: you most likely heard a difference.',
    });
    expect(blindWords(11, 16).meaning).toContain('no sign that you heard a difference; it would take 12 of 16');
    expect(blindWords(3, 16).meaning).toContain('100 of 100 tests');
    expect(blindWords(8, 16).meaning).toContain('60 of 100 tests');
  });
});
