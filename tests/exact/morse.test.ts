import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { dotSeconds, keyedCarrier, sampledMarks } from '../../src/engine/station/morse.ts';
import { keyedText } from '../../src/engine/station/morse-code.ts';

const RATE = 48_000;
/** The code of a text as marks with their spaces, in dots: 1 on, -1 off and so on. */
const spelled = (text: string): string => {
  const { marks } = keyedText(text, 'text');
  let at = 0;
  return marks
    .map(({ start, length }) => {
      const space = start - at;
      at = start + length;
      return `${space === 0 ? '' : space === 1 ? '' : space === 3 ? ' ' : ` /${space}/ `}${length === 1 ? '.' : '-'}`;
    })
    .join('');
};

describe('the code', () => {
  // ITU-R M.1677-1 (10/2009), Annex 1, part I, clause 1.1 (title seen, table from memory)
  it.each([
    ['CQ', '-.-. --.-'],
    ['é', '..-..'],
    ['73', '--... ...--'],
    ['?/=', '..--.. -..-. -...-'],
    ['a b', '.- /7/ -...'],
    ['  a\n  b  ', '.- /7/ -...'],
    ['<SK>', '...-.-'],
    ['E<AR>', '. .-.-.'],
    ['don’t', '-.. --- -. .----. -'],
  ])('%j', (text, code) => expect(spelled(text)).toBe(code));

  it('has a code of its own for every letter and figure', () => {
    const letters = [...'ABCDEFGHIJKLMNOPQRSTUVWXYZÉ0123456789'];
    expect(new Set(letters.map(spelled)).size).toBe(letters.length);
  });

  it.each([
    ['CQ #1 %', '"#", "%"'],
    ['<A!>', '"!"'],
    ['a<b', '"<"'],
    ['constructor ~', '"~"'],
  ])('%j: what has no sign is named', (text, got) => {
    const found = faultOf(() => keyedText(text, 'on the air.morse.text'));
    expect(found).toMatchObject({ code: 'no-morse-sign', where: 'on the air.morse.text', got });
  });

  it('no text at all', () => {
    expect(faultOf(() => keyedText(' \n', '--morse'))).toMatchObject({ code: 'no-morse-text', where: '--morse' });
  });
});

describe('timing', () => {
  // marks 1 and 3, spaces 1, 3 and 7: http://tpals.org/emorse.htm (seen); P 14, A 8, R 10, I 6, S 12 with the spaces
  // after them: https://kent-engineers.com/codespeed.htm (seen)
  it('PARIS is 43 dots, 50 with the space after it', () => {
    expect(keyedText('PARIS', 'text').dots).toBe(43);
    expect(keyedText('PARIS PARIS', 'text').dots).toBe(93);
    const starts = (text: string): number => keyedText(`${text}E`, 'text').dots - 1;
    expect([...'PARI'].map(starts)).toEqual([14, 8, 10, 6]);
  });

  // dot 240, 92.31 and 60 ms: the same page (seen). Exact to one sample: each instant is rounded by itself
  it.each([
    [5, 240],
    [13, 92.307_692_307],
    [20, 60],
  ])('%d words a minute: dots of %d ms, no error adds up over 20 words', (speed, milliseconds) => {
    expect(1000 * dotSeconds(speed)).toBeCloseTo(milliseconds, 6);
    const keyed = keyedText(Array(20).fill('PARIS').join(' '), 'text');
    const marks = sampledMarks(keyed, speed, RATE);
    marks.forEach(({ from, to }, k) => {
      const { start, length } = keyed.marks[k] as (typeof keyed.marks)[number];
      expect(Math.abs(from - (7 + start) * 1e-3 * milliseconds * RATE)).toBeLessThanOrEqual(1);
      expect(Math.abs(to - (7 + start + length) * 1e-3 * milliseconds * RATE)).toBeLessThanOrEqual(1);
    });
    // twenty words of 50 dots, less the last space: 1200 s over the speed
    const last = marks.at(-1) as (typeof marks)[number];
    expect(Math.abs(last.to - (marks[0]?.from ?? 0) - ((1200 / speed) * 993 * RATE) / 1000)).toBeLessThanOrEqual(1);
  });
});

describe('the keyed carrier', () => {
  const sent = keyedCarrier({ text: 'PARIS', wordsPerMinute: 13, edgeSeconds: 5e-3 }, RATE, 'text');
  const marks = sampledMarks(keyedText('PARIS', 'text'), 13, RATE);

  it('stands half way at the instants of the code, whatever the edge', () => {
    for (const edgeSeconds of [1e-3, 5e-3, 20e-3]) {
      const carrier = keyedCarrier({ text: 'PARIS', wordsPerMinute: 13, edgeSeconds }, RATE, 'text');
      for (const { from, to } of marks) {
        expect(carrier[from]).toBeCloseTo(0.5, 12);
        expect(carrier[to]).toBeCloseTo(0.5, 12);
        expect(carrier[(from + to) >> 1]).toBe(1);
      }
      expect(carrier.length).toBe(Math.round(57 * (1.2 / 13) * RATE));
      expect(carrier[0]).toBe(0);
      expect(carrier.at(-1)).toBe(0);
    }
  });

  it('rises as a raised cosine: 10 to 90 % in 0.59 of its edge', () => {
    const { from } = marks[0] as (typeof marks)[number];
    for (let n = -120; n <= 120; n++)
      expect(sent[from + n]).toBeCloseTo(0.5 * (1 - Math.cos((Math.PI * (n + 120)) / 240)), 12);
    const crossing = (level: number): number => {
      const n = sent.findIndex((value) => value >= level);
      return n - (sent[n]! - level) / (sent[n]! - sent[n - 1]!);
    };
    // arccos(0.8)/π = 0.2048 either side; 1e-4: the straight line between samples
    expect((crossing(0.9) - crossing(0.1)) / 240).toBeCloseTo(1 - (2 * Math.acos(0.8)) / Math.PI, 4);
  });

  it('stays within 0 and 1, with edges as long as a dot too', () => {
    const longest = keyedCarrier({ text: 'SOS', wordsPerMinute: 20, edgeSeconds: 0.06 }, RATE, 'text');
    expect(longest.every((value) => value >= 0 && value <= 1)).toBe(true);
  });

  it('an edge longer than a dot is refused', () => {
    const found = faultOf(() => keyedCarrier({ text: 'E', wordsPerMinute: 60, edgeSeconds: 0.021 }, RATE, 'text'));
    expect(found).toMatchObject({ code: 'edge-too-long', expected: 'at most a dot, 20.0 ms at 60 words a minute' });
  });
});

function faultOf(work: () => unknown): unknown {
  try {
    work();
  } catch (error) {
    if (error instanceof InputError) return error.faults[0];
    throw error;
  }
  return null;
}
