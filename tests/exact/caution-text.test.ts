import { describe, expect, it } from 'vitest';
import type { Caution } from '../../src/engine/circuits/cautions.ts';
import { gatherCautions, gatheredText } from '../../src/results/caution-list.ts';
import { cautionText } from '../../src/results/caution-text.ts';

/** Every caution with invented figures; what its sentence must hold: figure, limit, and what to do. */
const SENTENCES: readonly (readonly [Caution, readonly string[]])[] = [
  [{ code: 'shock', figure: 90, limit: 45 }, ['90 V', '45 V', 'discharge']],
  [{ code: 'phones-in-plate', figure: 67.5, limit: 0 }, ['67.5 V', '0 V', 'Isolate them']],
  [
    { code: 'plate-volts', figure: 312, limit: 300, source: 'a manual, seen' },
    ['312 V', '300 V', '(a manual, seen)', 'lower the supply'],
  ],
  [
    { code: 'plate-watts', figure: 1.625, limit: 1, source: 'a manual, seen' },
    ['1.63 W', '1.00 W', '(a manual, seen)', 'raise the plate load'],
  ],
  [
    { code: 'resistor-watts', figure: 0.48, limit: 0.125, further: 1, name: 'plate load' },
    ['plate load', '480 mW', '125 mW', 'fit one of 1 W'],
  ],
  [
    { code: 'resistor-watts', figure: 0.2, limit: 0.125, further: 0.5, name: 'dropping resistor' },
    ['dropping resistor', '200 mW', 'fit one of 1/2 W'],
  ],
  [
    { code: 'resistor-watts', figure: 3, limit: 0.125, further: 0, name: 'plate load' },
    ['3 W', 'divide it over several resistors'],
  ],
  [
    { code: 'winding-amps', figure: 4.1e-3, limit: 2e-3, name: 'transformer', source: 'early 1:5: typical' },
    ['4.1 mA', '2 mA', 'through the transformer', '(early 1:5: typical)', 'Lower the supply'],
  ],
  [
    { code: 'battery-life', figure: 3.01e-4, limit: 0.5, further: 1661 },
    ['301 µA', '500 mAh', '1700 hours', 'stretches it'],
  ],
  [{ code: 'next-grid-volts', figure: 7.72, limit: 0.1 }, ['7.72 V', '100 mV', 'Replace the capacitor']],
  [
    { code: 'small-grid-capacitor', figure: 50e-12, limit: 87.5e-12, further: 1.41 },
    ['50 pF', '87.5 pF', '1.4 dB', '100 pF would do'],
  ],
  [{ code: 'slope-limit', figure: 414, limit: 1000, further: 0.562 }, ['414 Hz', '1 kHz', '56 %', 'down 2.4 times']],
  [{ code: 'peak-clipping', figure: 0.665, limit: 0.8 }, ['67 %', '80 %', 'a lower diode load']],
  [{ code: 'carrier-on-plate', figure: 0.628, limit: 0.5, further: 680e-12 }, ['630 mV', '500 mV', 'about 680 pF']],
  [{ code: 'ripple', figure: 11.66, limit: 20 }, ['11.7', '20', 'A larger leak or grid capacitor']],
  [{ code: 'plate-harmonic', figure: 0.113, limit: 0.05 }, ['11 %', '5 %', 'More plate bypass']],
  [{ code: 'bare-plate', figure: 0.0128, limit: 0.01 }, ['1.3 %', '1 %', 'More plate bypass']],
  [{ code: 'little-bypass', figure: 6.8e-12, limit: 50e-12 }, ['6.8 pF', '50 pF', '0.3 dB', 'More plate bypass']],
  [{ code: 'slow-carrier', figure: 150e3, limit: 160e3 }, ['150 kHz', '160 kHz', 'raise the carrier']],
  [{ code: 'outside-rows', figure: 22.5, limit: 100 }, ['22.5 V', '100 V', 'tube: rows']],
  [{ code: 'bypass-inaudible', figure: 0.2, limit: 8.04 }, ['0.2 dB', '8.0 dB', 'change what the plate feeds']],
  [{ code: 'textbook', figure: 0, limit: 0 }, ['textbook law', 'law: tube']],
  [{ code: 'limited', figure: 37, limit: 0 }, ['37 samples', '−100 %', 'set the modulation']],
  [{ code: 'unsettled', figure: 12, limit: 48_100 }, ['12 moments', '48100 samples', 'nearer to usual ones']],
];

/** Where a limit comes from: every sentence with one says so. Facts of the signal or of the list itself need none. */
const SOURCE =
  /common practice, no source|measured against the integration|from memory\)|\(a manual, seen\)|typical\)|published rows/;
const NEEDS_NONE = new Set<Caution['code']>(['textbook', 'limited', 'unsettled']);

describe('sentences of cautions', () => {
  it.each(SENTENCES)('%o', (caution, parts) => {
    const text = cautionText(caution);
    for (const part of parts) expect(text).toContain(part);
    if (!NEEDS_NONE.has(caution.code)) expect(text).toMatch(SOURCE);
    expect(text).toMatch(/[.)]$/);
    expect(text).not.toMatch(/NaN|undefined|Infinity| {2}/);
    // short: two or three lines of a terminal, the shock caution's four
    expect(text.length).toBeLessThan(caution.code === 'shock' ? 400 : 340);
  });

  it('no two cautions share a sentence', () => {
    const begins = new Set(SENTENCES.map(([caution]) => cautionText(caution)));
    expect(begins.size).toBe(SENTENCES.length);
  });
});

describe('cautions of several variants', () => {
  const loud = (figure: number): string => cautionText({ code: 'shock', figure, limit: 45 });
  const dull = cautionText({ code: 'textbook', figure: 0, limit: 0 });
  const hot = (figure: number, further: number): string =>
    cautionText({ code: 'resistor-watts', name: 'plate load', figure, limit: 0.125, further });

  it('what all are told alike stands once and names none', () => {
    const gathered = gatherCautions([
      { name: 'a', cautions: [dull, loud(90)] },
      { name: 'b', cautions: [loud(90), dull] },
    ]);
    expect(gathered).toEqual([
      { text: dull, names: [], also: [] },
      { text: loud(90), names: [], also: [] },
    ]);
  });

  it('what differs in figures alone stands once, with whom it also concerns', () => {
    const gathered = gatherCautions([
      { name: 'a', cautions: [loud(90)] },
      { name: 'b', cautions: [loud(180)] },
      { name: 'c', cautions: [loud(90)] },
    ]);
    expect(gathered).toEqual([{ text: loud(90), names: ['a', 'c'], also: ['b'] }]);
    expect(gatheredText(gathered[0]!)).toBe(`${loud(90)} Likewise, with figures of their own: b.`);
  });

  it.each([
    [hot(0.2, 1), hot(4.8e-1, 1)],
    [
      cautionText({ code: 'carrier-on-plate', figure: 0.6, limit: 0.5, further: 680e-12 }),
      cautionText({ code: 'carrier-on-plate', figure: 1.2, limit: 0.5, further: 1.5e-9 }),
    ],
    [
      cautionText({ code: 'slope-limit', figure: 414, limit: 1e3, further: 0.5 }),
      cautionText({ code: 'slope-limit', figure: 50, limit: 1e3, further: 0.06 }),
    ],
  ])('%s and the same with other prefixes are one matter', (one, other) => {
    expect(one).not.toBe(other);
    const gathered = gatherCautions([
      { name: 'a', cautions: [one] },
      { name: 'b', cautions: [other] },
    ]);
    expect(gathered).toEqual([{ text: one, names: ['a'], also: ['b'] }]);
  });

  it('different matters stay apart', () => {
    const texts = SENTENCES.map(([caution]) => cautionText(caution));
    const kinds = new Set(SENTENCES.map(([{ code, name, further }]) => `${code} ${name} ${further === 0}`));
    expect(
      gatherCautions([
        { name: 'a', cautions: texts },
        { name: 'b', cautions: [] },
      ]),
    ).toHaveLength(kinds.size);
  });
});
