import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { formatQuantity, letterCode, type QuantityKind } from '../../src/engine/parts/format-quantity.ts';
import { nearestName } from '../../src/engine/parts/nearest-name.ts';
import { PREFERRED_DIGITS } from '../../src/engine/parts/preferred-values.ts';
import { parseQuantity, readQuantity } from '../../src/engine/parts/quantities.ts';

function fault(written: string | number, kind: QuantityKind, range = {}) {
  const reading = readQuantity(written, kind, 'here', range);
  return 'fault' in reading ? reading.fault : null;
}

describe('letter codes', () => {
  // IEC 60062 as tabulated at https://en.wikipedia.org/wiki/IEC/EN_60062 (seen)
  it.each([
    ['R47', 0.47],
    ['4R7', 4.7],
    ['470R', 470],
    ['4K7', 4700],
    ['47K', 47000],
    ['47K3', 47300],
    ['470K', 470000],
    ['4M7', 4.7e6],
  ])('resistance %s', (written, ohms) => {
    expect(parseQuantity(written, 'resistance', 'here')).toBe(ohms);
  });

  // IEC 60062 (from memory)
  it.each([
    ['4p7', 4.7e-12],
    ['47p', 4.7e-11],
    ['4n7', 4.7e-9],
    ['u47', 4.7e-7],
    ['470n', 4.7e-7],
    ['4u7', 4.7e-6],
  ])('capacitance %s', (written, farads) => {
    expect(parseQuantity(written, 'capacitance', 'here')).toBe(farads);
  });
});

describe('quantities as they are written', () => {
  const cases: readonly [QuantityKind, string | number, number][] = [
    ['resistance', '2 MΩ', 2e6],
    ['resistance', '2M', 2e6],
    ['resistance', '2M2', 2.2e6],
    ['resistance', '2M2 ohm', 2.2e6],
    ['resistance', '2.2 M\u2126', 2.2e6],
    ['resistance', '2.2 M\u03a9', 2.2e6],
    ['resistance', '2.2 Mohm', 2.2e6],
    ['resistance', '2.2 megohms', 2.2e6],
    ['resistance', '2.2 MEG', 2.2e6],
    ['resistance', '470k', 470e3],
    ['resistance', '4k7', 4700],
    ['resistance', '4R7 ohm', 4.7],
    ['resistance', '0R22', 0.22],
    ['resistance', '100 Ohm', 100],
    ['resistance', '10 ohms', 10],
    ['resistance', 47000, 47000],
    ['resistance', '1e6', 1e6],
    ['resistance', '1E6', 1e6],
    ['resistance', '1.5e3k', 1.5e6],
    ['resistance', '2,2k', 2200],
    ['resistance', '4,75 kΩ', 4750],
    ['resistance', '2m2', 2.2e-3],
    ['capacitance', '100 pF', 100e-12],
    ['capacitance', '100p', 100e-12],
    ['capacitance', '0.1 \u00b5F', 1e-7],
    ['capacitance', '0.1 \u03bcF', 1e-7],
    ['capacitance', '.1uF', 1e-7],
    ['capacitance', '0,1 µF', 1e-7],
    ['capacitance', '0,001 µF', 1e-9],
    ['capacitance', '10n', 1e-8],
    ['capacitance', '47n', 4.7e-8],
    ['capacitance', '1u5', 1.5e-6],
    ['capacitance', '1\u00b55', 1.5e-6],
    ['capacitance', '250 mmfd', 250e-12],
    ['capacitance', '250 mmf', 250e-12],
    ['capacitance', '250 MMFD', 250e-12],
    ['capacitance', '250 µµF', 250e-12],
    ['capacitance', '.00025 mfd', 250e-12],
    ['capacitance', '.00025 MFD', 250e-12],
    ['capacitance', '8 mfd', 8e-6],
    ['capacitance', '250 PF', 250e-12],
    ['capacitance', '1 mF', 1e-3],
    ['capacitance', 0, 0],
    ['inductance', '200 µH', 200e-6],
    ['inductance', '2.5mH', 2.5e-3],
    ['inductance', '30 H', 30],
    ['inductance', '30 henries', 30],
    ['voltage', '45 V', 45],
    ['voltage', '60 mV', 0.06],
    ['voltage', '-4.5', -4.5],
    ['voltage', '\u22124.5 V', -4.5],
    ['voltage', '1.4 volts', 1.4],
    ['voltage', '-0', 0],
    ['current', '2.3 mA', 2.3e-3],
    ['current', '10µA', 1e-5],
    ['power', '500 mW', 0.5],
    ['frequency', '920 kHz', 920e3],
    ['frequency', '455kHz', 455e3],
    ['frequency', '1M2', 1.2e6],
    ['frequency', '920 kc', 920e3],
    ['frequency', '1.2 Mc/s', 1.2e6],
    ['frequency', '1e6', 1e6],
    ['frequency', '920 khz', 920e3],
    ['fraction', '80 %', 0.8],
    ['fraction', '80%', 0.8],
    ['fraction', '0.8', 0.8],
    ['ratio', '1:3', 3],
    ['ratio', '1 : 2.5', 2.5],
    ['ratio', 3, 3],
    ['number', '90', 90],
    ['number', '1.5', 1.5],
  ];
  it.each(cases)('%s %s is %d', (kind, written, value) => {
    expect(parseQuantity(written, kind, 'here')).toBe(value);
  });

  it('builds the number from its decimal text, so a prefix costs no rounding', () => {
    for (const digits of PREFERRED_DIGITS.E24) {
      for (const [prefix, power] of [
        ['p', -12],
        ['n', -9],
        ['u', -6],
      ] as const) {
        expect(parseQuantity(`${digits}${prefix}`, 'capacitance', 'here')).toBe(Number(`${digits}e${power}`));
      }
    }
    expect(47 * 1e-9).not.toBe(4.7e-8);
  });
});

describe('what is refused, and with which words', () => {
  const refused: readonly [QuantityKind, string | number, string][] = [
    ['resistance', '2M2x', 'wrong-unit'],
    ['resistance', '12AX7', 'wrong-unit'],
    ['resistance', '47q', 'wrong-unit'],
    ['resistance', '', 'not-a-quantity'],
    ['resistance', 'k', 'not-a-quantity'],
    ['resistance', '2 2 M', 'not-a-quantity'],
    ['resistance', '1 000', 'not-a-quantity'],
    ['resistance', '2,200', 'ambiguous-comma'],
    ['resistance', '2,200k', 'ambiguous-comma'],
    ['resistance', '1,000,000', 'ambiguous-comma'],
    ['resistance', '1.000,5', 'ambiguous-comma'],
    ['resistance', '1e999', 'not-a-quantity'],
    ['resistance', Number.NaN, 'not-a-quantity'],
    ['resistance', '1e6e3', 'wrong-unit'],
    ['capacitance', '0.1 mf', 'ambiguous-prefix'],
    ['capacitance', '0.1 MF', 'ambiguous-prefix'],
    ['capacitance', '100 M', 'ambiguous-prefix'],
    ['inductance', '200 MH', 'ambiguous-prefix'],
    ['voltage', '60 MV', 'ambiguous-prefix'],
    ['frequency', '920 mhz', 'ambiguous-prefix'],
    ['voltage', '60 mV peak', 'wrong-unit'],
    ['ratio', '3:1', 'ambiguous-ratio'],
    ['number', '2M2', 'wrong-unit'],
    ['number', '40 %', 'wrong-unit'],
  ];
  it.each(refused)('%s "%s": %s', (kind, written, code) => {
    expect(fault(written, kind)?.code).toBe(code);
  });

  it('names the accepted units and what the unit belongs to', () => {
    expect(fault('100 pF', 'resistance')).toEqual({
      code: 'wrong-unit',
      where: 'here',
      got: '100 pF',
      expected: 'a resistance in Ω or ohm, with m, k, M, G',
      hint: 'that is a capacitance',
    });
    expect(fault('80 %', 'voltage')?.hint).toBe('that is a fraction');
    expect(fault('47q', 'resistance')?.hint).toBeUndefined();
  });

  it('names the range with units', () => {
    const range = { atLeast: 10e3, atMost: 100e6 };
    expect(fault('1k', 'resistance', range)).toMatchObject({
      code: 'out-of-range',
      got: '1k',
      expected: '10 kΩ to 100 MΩ',
    });
    expect(fault('10k', 'resistance', range)).toBeNull();
    expect(fault('100M', 'resistance', range)).toBeNull();
    expect(fault('0', 'capacitance', { above: 0 })?.expected).toBe('above 0 F');
    expect(fault('80', 'fraction', { atLeast: 0, atMost: 1 })?.expected).toBe('0 % to 100 %');
    expect(fault('-1', 'voltage', { atLeast: 0 })?.expected).toBe('0 V or more');
    expect(fault('2', 'ratio', { atMost: 1 })?.expected).toBe('at most 1:1');
    expect(fault('2', 'number', { above: 0, atMost: 1 })?.expected).toBe('above 0, at most 1');
  });

  it('throws the same fault from parseQuantity', () => {
    expect(() => parseQuantity('47q', 'resistance', 'plate.load')).toThrow(InputError);
    expect(() => parseQuantity('47q', 'resistance', 'plate.load')).toThrow('plate.load: wrong-unit');
  });
});

describe('quantities as they are printed', () => {
  it.each([
    [150e-12, 'capacitance', '150 pF'],
    [2.2e6, 'resistance', '2.2 MΩ'],
    [4700, 'resistance', '4.7 kΩ'],
    [920e3, 'frequency', '920 kHz'],
    [0.06, 'voltage', '60 mV'],
    [0, 'capacitance', '0 F'],
    [-4.5, 'voltage', '-4.5 V'],
    [999.96e3, 'resistance', '1 MΩ'],
    [4.7e-8, 'capacitance', '47 nF'],
    [3.4e-16, 'capacitance', '0.34 fF'],
    [1e-18, 'capacitance', '0.001 fF'],
    [5e15, 'resistance', '5000 TΩ'],
    [0.8, 'fraction', '80 %'],
    [3, 'ratio', '1:3'],
    [1234.56, 'number', '1235'],
    [Number.POSITIVE_INFINITY, 'resistance', 'Infinity'],
  ] as const)('%d as %s is %s', (value, kind, text) => {
    expect(formatQuantity(value, kind)).toBe(text);
  });

  it.each([
    [4700, 'resistance', '4k7'],
    [2.2e6, 'resistance', '2M2'],
    [470, 'resistance', '470R'],
    [4.7, 'resistance', '4R7'],
    [0.47, 'resistance', 'R47'],
    [47300, 'resistance', '47k3'],
    [150e-12, 'capacitance', '150p'],
    [2.2e-9, 'capacitance', '2n2'],
    [4.7e-6, 'capacitance', '4µ7'],
    [1e-7, 'capacitance', '100n'],
    [200e-6, 'inductance', '200µ'],
    [2.5e-3, 'inductance', '2m5'],
  ] as const)('%d as a letter code of %s is %s', (value, kind, text) => {
    expect(letterCode(value, kind)).toBe(text);
  });

  it('reads back exactly what it prints, for every preferred value of every decade', () => {
    for (const digits of PREFERRED_DIGITS.E24) {
      for (let power = -2; power <= 6; power++) {
        const ohms = Number(`${digits}e${power}`);
        expect(parseQuantity(formatQuantity(ohms, 'resistance'), 'resistance', 'here')).toBe(ohms);
        expect(parseQuantity(letterCode(ohms, 'resistance'), 'resistance', 'here')).toBe(ohms);
        const farads = Number(`${digits}e${power - 11}`);
        expect(parseQuantity(formatQuantity(farads, 'capacitance'), 'capacitance', 'here')).toBe(farads);
        expect(parseQuantity(letterCode(farads, 'capacitance'), 'capacitance', 'here')).toBe(farads);
      }
    }
  });
});

describe('nearest name', () => {
  it.each([
    ['bypas', 'bypass'],
    ['by pass', 'bypass'],
    ['laod', 'load'],
    ['grid capcitor', 'grid capacitor'],
    ['supply', 'supply'],
    ['colour', null],
  ])('%s: %s', (typed, name) => {
    expect(nearestName(typed, ['bypass', 'load', 'supply', 'grid capacitor'])).toBe(name);
  });
});
