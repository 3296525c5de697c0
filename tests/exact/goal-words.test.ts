import { describe, expect, it } from 'vitest';
import type { Goal } from '../../src/engine/choosing/goals.ts';
import { InputError } from '../../src/engine/errors.ts';
import { goalWords } from '../../src/list/figure-words.ts';
import { GOAL_FORMS, readGoals } from '../../src/list/goal-words.ts';
import { faultText } from '../../src/results/fault-text.ts';

const goal = (written: string): Goal => {
  const goals = readGoals(written, '--until');
  expect(goals).toHaveLength(1);
  return goals[0] as Goal;
};
const second = { kind: 'harmonic', which: 'second', hertz: 400, depth: 0.8 } as const;

describe('goals in a builder’s words', () => {
  const cases: [string, Goal][] = [
    ['-6 dB at 5 kHz', { kind: 'figure', figure: { kind: 'decibels', hertz: 5000 }, target: -6 }],
    ['−6dB at 5k', { kind: 'figure', figure: { kind: 'decibels', hertz: 5000 }, target: -6 }],
    ['+ 1.5 dB at 3 kc', { kind: 'figure', figure: { kind: 'decibels', hertz: 3000 }, target: 1.5 }],
    ['corner 3.5 kHz', { kind: 'figure', figure: { kind: 'high corner' }, target: 3500 }],
    ['  Treble   corner at 3k5 ', { kind: 'figure', figure: { kind: 'high corner' }, target: 3500 }],
    ['low corner 80 Hz', { kind: 'figure', figure: { kind: 'low corner' }, target: 80 }],
    ['second harmonic 3 % at 400 Hz, 80 % modulation', { kind: 'figure', figure: second, target: 3 }],
    ['2nd harmonic 3%', { kind: 'figure', figure: second, target: 3 }],
    ['second harmonic 3', { kind: 'figure', figure: second, target: 3 }],
    [
      'total distortion 5 % at 1 kHz, 30 % modulation',
      { kind: 'figure', figure: { ...second, which: 'total', hertz: 1000, depth: 0.3 }, target: 5 },
    ],
    [
      'third harmonic 1 %, 100 % modulation at 1 kHz',
      { kind: 'figure', figure: { ...second, which: 'third', hertz: 1000, depth: 1 }, target: 1 },
    ],
    ['carrier on plate 100 mV', { kind: 'figure', figure: { kind: 'carrier on plate' }, target: 0.1 }],
    ['carrier on the anode 0.1 V', { kind: 'figure', figure: { kind: 'carrier on plate' }, target: 0.1 }],
    ['plate 45 V', { kind: 'figure', figure: { kind: 'plate volts' }, target: 45 }],
    ['loaded Q 40', { kind: 'figure', figure: { kind: 'loaded Q' }, target: 40 }],
    ['loudest', { kind: 'loudest', limit: null }],
    [
      'loudest with corner above 3 kHz',
      { kind: 'loudest', limit: { figure: { kind: 'high corner' }, target: 3000, side: 'above' } },
    ],
    [
      'loudest with second harmonic at most 5 % at 400 Hz, 80 % modulation',
      { kind: 'loudest', limit: { figure: second, target: 5, side: 'below' } },
    ],
    [
      'loudest with at least -6 dB at 5 kHz',
      { kind: 'loudest', limit: { figure: { kind: 'decibels', hertz: 5000 }, target: -6, side: 'above' } },
    ],
  ];

  it.each(cases)('%s', (written, expected) => {
    expect(goal(written)).toEqual(expected);
    // what is printed can be typed again
    expect(goal(goalWords(expected))).toEqual(expected);
  });

  it('every form that a fault offers is read', () => {
    for (const form of GOAL_FORMS) expect(goalWords(goal(form))).toBe(form);
  });

  it('two goals with a semicolon', () => {
    expect(readGoals('corner 3.5 kHz; second harmonic 3 % at 400 Hz, 80 % modulation;', '--until')).toHaveLength(2);
  });
});

describe('a wrong goal is told with what was understood and what is accepted', () => {
  const cases: [string, ...string[]][] = [
    ['', 'no goal', 'corner 3.5 kHz', 'loudest with corner above 3 kHz'],
    ['brighter', '"brighter"', '-6 dB at 5 kHz'],
    ['corner', 'nothing after "corner", which is understood', 'a frequency', 'corner 3.5 kHz'],
    ['corner 3.5 kV', '"3.5 kV" after "corner", which is understood', 'a frequency', 'that is a voltage'],
    ['corner 300 Hz', '"300 Hz" after "corner"', '401 Hz to 16 kHz'],
    ['corner 3 kHz please', '"3 kHz please" after "corner"', 'a frequency'],
    ['low corner 800 Hz', '"800 Hz" after "low corner"', '1 Hz to 399 Hz'],
    ['corner above 3 kHz', '"corner above 3 kHz"', 'corner 3.5 kHz', 'loudest with corner above 3 kHz'],
    ['-6 dB', 'nothing after "-6 dB", which is understood', 'at and a frequency'],
    ['-6 dB at 400 Hz', '"400 Hz" after "-6 dB at"', 'another frequency'],
    ['-6 dB at 5 V', '"5 V" after "-6 dB at"', 'a frequency'],
    ['-600 dB at 5 kHz', '"-600 dB at 5 kHz"', '-60 to +40 dB'],
    ['second harmonic 3 V', '"3 V" after "second harmonic"', 'a fraction', '3 % at 400 Hz'],
    ['second harmonic 3 % at 400 Hz, 80 %', 'nothing after', 'modulation'],
    ['second harmonic 3 % at 400 Hz, 180 % modulation', '"180 % modulation" after', 'at most 100 %'],
    ['second harmonic 3 % at 400 Hz, 80 % modulation, loud', '", loud" after', 'the end of the goal'],
    ['carrier on plate 0', '"0" after "carrier on plate"', 'above 0 V'],
    ['loudest corner', '"corner" after "loudest"', 'loudest with corner above 3 kHz'],
    ['loudest with', 'nothing after "loudest with"', 'corner above 3 kHz'],
    [
      'loudest with corner 3 kHz',
      '"3 kHz" after "loudest with corner"',
      'above, over, at least, below, under, at most',
    ],
    ['loudest with at least 5 V', '"5 V" after "loudest with at least"', '-6 dB at 5 kHz'],
    ['corner 3 kHz; corner 4 kHz; corner 5 kHz', '3 goals', 'at most 2'],
  ];

  it.each(cases)('%s', (written, ...named) => {
    let text = '';
    try {
      readGoals(written, '--until');
    } catch (error) {
      expect(error).toBeInstanceOf(InputError);
      text = (error as InputError).faults.map(faultText).join('\n');
    }
    expect(text).toMatch(/^--until: found /);
    for (const words of named) expect(text.toLowerCase()).toContain(words.toLowerCase());
  });
});
