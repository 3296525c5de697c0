import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { InputError } from '../../src/engine/errors.ts';
import { splitTolerance, toleranceText } from '../../src/engine/parts/tolerance.ts';
import { nominalValue, withFactors } from '../../src/engine/spread/off-nominal.ts';
import { tolerancedParts } from '../../src/engine/spread/part-tolerances.ts';
import { VARIED_PARTS } from '../../src/engine/spread/varied-parts.ts';
import { triodePoint } from '../../src/engine/tubes/laws.ts';
import { CHANGEABLE } from '../../src/list/schema.ts';
import { statedTolerances } from '../../src/list/stated-tolerances.ts';
import { listVariants, type Setting } from '../../src/list/variants.ts';

/** A relative error that only arithmetic makes: a few roundings of 2^-53, about 1.1e-16 each. */
const ROUNDINGS = 1e-14;

const circuitOf = (text: string): DetectorCircuit => listVariants(text, 'set.yaml')[0]!.circuit;
const stated = (text: string, settings: readonly Setting[] = []) =>
  statedTolerances(listVariants(text, 'set.yaml', settings)[0]!.layers);

function faultsOf(text: string): string[] {
  try {
    listVariants(text, 'set.yaml');
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return error.faults.map(({ code, where, line, column }) => `${code} ${where} ${line}:${column}`);
  }
  return [];
}

describe('a tolerance behind a value', () => {
  // value, least, most, as written on parts and drawings
  it.each([
    ['100 pF ±20 %', '100 pF', 0.8, 1.2],
    ['100p±20%', '100p', 0.8, 1.2],
    ['100p +-20 %', '100p', 0.8, 1.2],
    ['100p +/- 2,5 %', '100p', 0.975, 1.025],
    ['100 pF -20/+50 %', '100 pF', 0.8, 1.5],
    ['220 kΩ \u221210/+30%', '220 kΩ', 0.9, 1.3],
    ['220k -10 %/+30 %', '220k', 0.9, 1.3],
    ['220k +30/-10 %', '220k', 0.9, 1.3],
    ['100p -0/+20 %', '100p', 1, 1.2],
    ['1.5e+3 ±0 %', '1.5e+3', 1, 1],
    ['10 µA ×/÷ 4', '10 µA', 0.25, 4],
    ['10u */ 4', '10u', 0.25, 4],
    ['6SL7-GT ±15 %', '6SL7-GT', 0.85, 1.15],
  ])('%s', (text, value, least, most) => {
    const reading = splitTolerance(text);
    if ('fault' in reading || reading.tolerance === null) throw new Error(`not read: ${text}`);
    expect(reading.value).toBe(value);
    expect(Math.abs(reading.tolerance.least / least - 1)).toBeLessThan(ROUNDINGS);
    expect(Math.abs(reading.tolerance.most / most - 1)).toBeLessThan(ROUNDINGS);
    expect(reading.tolerance.evenIn).toBe(/÷|\*/.test(text) ? 'ratio' : 'value');
    // what is shown of it is read as the same
    expect(splitTolerance(`1 ${toleranceText(reading.tolerance)}`)).toMatchObject({
      tolerance: { evenIn: reading.tolerance.evenIn, most: expect.closeTo(most, 3) },
    });
  });

  it.each(['100 pF', '2M2', '-4.5 V', '1e+3', '6SL7-GT', '01-A', '0', 'none', 'x'.repeat(500)])(
    '%s has none and stays as it is',
    (text) => {
      expect(splitTolerance(text)).toEqual({ value: text, written: '', tolerance: null });
    },
  );

  it.each(['100p ±20', '100p 20 %', '±20 %', '100p ± x %', '100p -20 %', '100p +20/-10', '100p ±10 % ±5 %', '10u ×/÷'])(
    '%s is refused',
    (text) => {
      expect(splitTolerance(text)).toMatchObject({ fault: { code: 'bad-tolerance', got: text } });
    },
  );

  it.each(['100p ±96 %', '100p -10/+901 %', '10u ×/÷ 101', '10u ×/÷ 0.5'])('%s is too wide', (text) => {
    expect(splitTolerance(text)).toMatchObject({ fault: { code: 'tolerance-too-wide' } });
  });
});

describe('a parts list with tolerances', () => {
  it('counts nominally wherever tolerances are not asked for', () => {
    const plain = `tuned circuit: { coil: 210 µH }
detector: { tube: 76, grid capacitor: 150 pF, leak: 2M2 }
plate: { supply: 90 V, load: resistor 100k, bypass: 220 pF }
`;
    const withThem = `tuned circuit: { coil: 210 µH ±3 % }
detector: { tube: 76 ±20 %, grid capacitor: 150 pF ±5 %, leak: 2M2 -10/+30 % }
plate: { supply: 90 V -20/+5 %, load: resistor 100k ±1 %, bypass: 220 pF ±20 % }
`;
    expect(circuitOf(withThem)).toEqual(circuitOf(plain));
    const keys = ['tuned circuit.coil', 'detector.tube', 'detector.grid capacitor', 'detector.leak', 'plate.supply'];
    expect(Object.keys(stated(withThem)).sort()).toEqual([...keys, 'plate.load.resistance', 'plate.bypass'].sort());
    expect(stated(plain)).toEqual({});
  });

  it.each([
    'resistor 100k ±1 %',
    '100k ±1 %',
    '{ resistance: 100k ±1 % }',
    '{ kind: resistor, resistance: 100k ±1 % }',
  ])('takes it behind a load: %s', (load) => {
    expect(stated(`plate: { load: ${load} }`)).toEqual({
      'plate.load.resistance': { least: 0.99, most: 1.01, evenIn: 'value' },
    });
  });

  it('a flag and a variant stand over it, tolerance and all', () => {
    const text = 'plate: { bypass: 220 pF ±20 % }\nvariants: { a: { plate.bypass: 100p } }\n';
    expect(stated(text)).toEqual({});
    const flag = { key: 'plate.bypass', value: '47p ±5 %', where: '--bypass' };
    expect(stated(text, [flag])['plate.bypass']?.most).toBe(1.05);
  });

  it('a grid current that was measured is known; a leakage in place of the leak is the leak', () => {
    const key = 'tube.grid current.at zero volts';
    expect(stated('tube: { grid current: { at zero volts: 5 µA } }')[key]).toMatchObject({ least: 1, most: 1 });
    expect(stated('tube: { grid current: { at zero volts: 5 µA ×/÷ 2 } }')[key]).toMatchObject({ least: 0.5, most: 2 });
    const list = 'detector: { leak: none, grid capacitor leakage: 3M ±50 % }';
    expect(stated(list)['detector.leak']).toMatchObject({ least: 0.5, most: 1.5 });
  });

  it.each([
    ['plate: { bypass: 100p 20 % }', ['bad-tolerance plate.bypass 1:18']],
    ['plate: { bypass: 100p ±100 % }', ['tolerance-too-wide plate.bypass 1:18']],
    ['plate:\n  load: transformer 1:3 ±5 %', ['no-tolerance plate.load.ratio 2:9']],
    ['station: { level: 60 mV ±10 % }', ['no-tolerance station.level 1:19']],
    ['strays: { grid: 2p ±5 % }', ['no-tolerance strays.grid 1:17']],
    ['plate: { bypass: 220 pX ±20 % }', ['wrong-unit plate.bypass 1:18']],
    [
      'plate: { bypass: 100p ±, supply: 90 kg ±5 % }',
      ['bad-tolerance plate.bypass 1:18', 'wrong-unit plate.supply 1:34'],
    ],
  ])('%s is refused at its place', (text, faults) => {
    expect(faultsOf(text)).toEqual(faults);
  });
});

describe('the parts that vary', () => {
  it('have keys of the parts list, each once', () => {
    const keys = VARIED_PARTS.map((part) => part.key);
    expect(keys.filter((key) => !CHANGEABLE.has(key))).toEqual([]);
    expect(new Set(keys).size).toBe(keys.length);
  });

  // a list in which the part has a value, the value, and the list with 1.25 times that
  it.each([
    ['detector.grid capacitor', 'detector: { grid capacitor: # }', '200p', '250p'],
    ['detector.leak', 'detector: { leak: # }', '2M', '2M5'],
    ['detector.grid capacitor leakage', 'detector: { grid capacitor leakage: #, leak: 2M }', '2M', '2M5'],
    ['plate.bypass', 'plate: { bypass: # }', '200p', '250p'],
    ['plate.load.resistance', 'plate: { load: resistor # }', '200k', '250k'],
    ['output.coupling', 'output: { coupling: # }', '8n', '10n'],
    ['output.load resistance', 'output: { load resistance: # }', '1M', '1M25'],
    ['output.load capacitance', 'output: { load capacitance: # }', '80p', '100p'],
    ['tube.grid current.at zero volts', 'tube: { grid current: { at zero volts: # } }', '10u', '12.5u'],
    ['plate.dropping resistor', 'plate: { dropping resistor: # }', '20k', '25k'],
    ['plate.dropping capacitor', 'plate: { dropping resistor: 20k, dropping capacitor: # }', '1u', '1.25u'],
    ['plate.second bypass', 'plate: { carrier choke: 2.5 mH, second bypass: # }', '200p', '250p'],
    ['plate.carrier choke', 'plate: { carrier choke: # }', '2 mH', '2.5 mH'],
    ['plate.supply', 'detector: { tube: 76 }\nplate: { supply: # }', '80 V', '100 V'],
    ['tuned circuit.coil', 'tuned circuit: { coil: # }', '200u', '250u'],
    ['tuned circuit.capacitor', 'tuned circuit: { capacitor: # }', '100p', '125p'],
    ['tuned circuit.unloaded Q', 'tuned circuit: { unloaded Q: # }', '80', '100'],
    ['tuned circuit.loaded Q', 'tuned circuit: { loaded Q: # }', '40', '50'],
    ['plate.load.inductance', 'plate: { load: { kind: choke, inductance: #, core loss: 1M } }', '200', '250'],
    ['plate.load.dc resistance', 'plate: { load: { kind: choke, dc resistance: # } }', '4k', '5k'],
    ['plate.load.core loss', 'plate: { load: { kind: choke, core loss: # } }', '400k', '500k'],
    ['plate.load.self capacitance', 'plate: { load: { kind: choke, self capacitance: # } }', '80p', '100p'],
    ['plate.load.eddy loss', 'plate: { load: { kind: phones, eddy loss: # } }', '40k', '50k'],
    ['plate.load.primary inductance', 'plate: { load: { kind: transformer, primary inductance: # } }', '40', '50'],
    [
      'plate.load.primary dc resistance',
      'plate: { load: { kind: transformer, primary dc resistance: # } }',
      '800',
      '1k',
    ],
    ['plate.load.leakage', 'plate: { load: { kind: transformer, leakage: # } }', '80m', '100m'],
    ['plate.load.primary capacitance', 'plate: { load: { kind: transformer, primary capacitance: # } }', '40p', '50p'],
    [
      'plate.load.secondary dc resistance',
      'plate: { load: { kind: transformer, secondary dc resistance: # } }',
      '4k',
      '5k',
    ],
    [
      'plate.load.secondary capacitance',
      'plate: { load: { kind: transformer, secondary capacitance: # } }',
      '80p',
      '100p',
    ],
    ['detector.cathode resistor', 'detector: { kind: plate bend, cathode resistor: # }', '8k', '10k'],
    [
      'detector.cathode capacitor',
      'detector: { kind: infinite impedance, cathode resistor: 47k, cathode capacitor: # }',
      '200p',
      '250p',
    ],
    ['detector.perveance', 'detector: { kind: diode, perveance: # }', '4e-4', '5e-4'],
    [
      'detector.saturation current',
      'detector: { kind: crystal, diode: germanium, saturation current: # }',
      '0.4u',
      '0.5u',
    ],
    ['detector.series resistance', 'detector: { kind: crystal, diode: germanium, series resistance: # }', '200', '250'],
    ['detector.diode capacitance', 'detector: { kind: diode, diode capacitance: # }', '4p', '5p'],
    ['detector.diode load', 'detector: { kind: diode, diode load: # }', '400k', '500k'],
    ['detector.diode bypass', 'detector: { kind: diode, diode bypass: # }', '100p', '125p'],
    ['detector.filter resistor', 'detector: { kind: diode, filter resistor: # }', '40k', '50k'],
    [
      'detector.filter capacitor',
      'detector: { kind: diode, filter resistor: 40k, filter capacitor: # }',
      '100p',
      '125p',
    ],
  ])('%s off its value is the list with that value', (key, list, value, scaled) => {
    const part = VARIED_PARTS.find((one) => one.key === key)!;
    const circuit = circuitOf(list.replace('#', value));
    const off = circuitOf(list.replace('#', scaled));
    expect(nominalValue(off, part)! / nominalValue(circuit, part)!).toBeCloseTo(1.25, 12);
    // the cathode's law is fitted with the grid current taken off, 1e-10 of it and less at the published rows
    expectAlike(withFactors(circuit, [part], [1.25]), off, part.family === 'grid current' ? 1e-10 : ROUNDINGS);
  });

  it('every part but the tube is held so', () => {
    // the list above has one line a part: a new part needs its line
    expect(VARIED_PARTS.length).toBe(40);
  });

  it("a tube's current and slope go together, at any point of its curves", () => {
    const part = VARIED_PARTS.find((one) => one.key === 'detector.tube')!;
    const before = circuitOf('detector: { tube: 76 }').tube.law;
    const after = withFactors(circuitOf('detector: { tube: 76 }'), [part], [1.25]).tube.law;
    for (const [grid, plate] of [
      [-8, 180],
      [-1, 45],
      [-3, 90],
    ] as const) {
      const [a, b] = [triodePoint(before, grid, plate), triodePoint(after, grid, plate)];
      // the grid current, which stays, is 1e-5 of the cathode's and less at these points
      expect(b.plateAmps / a.plateAmps).toBeCloseTo(1.25, 4);
      expect(b.siemens / a.siemens).toBeCloseTo(1.25, 4);
    }
  });

  it('are those that a detector uses, none of another', () => {
    const varying = (text: string): string[] => tolerancedParts(circuitOf(text), {}, 'old').map((part) => part.name);
    const tube = ['tube, current and slope', 'grid current at 0 V'];
    const fed = ['coupling', 'resistance it feeds'];
    expect(varying('detector: { kind: plate bend, cathode resistor: 10k }')).toEqual(
      ['bypass', 'load, resistance', ...fed, ...tube].concat(['cathode resistor', 'cathode capacitor']),
    );
    expect(varying('detector: { kind: infinite impedance }')).toEqual(
      ['bypass', ...fed, ...tube].concat(['cathode resistor', 'cathode capacitor']),
    );
    expect(varying('detector: { kind: infinite impedance }\nplate: { dropping resistor: 10k }')).not.toContain(
      'bypass',
    );
    expect(varying('detector: { kind: diode }')).toEqual([...fed, 'diode, perveance', 'diode load', 'diode bypass']);
    expect(varying('detector: { kind: crystal, diode: germanium, filter resistor: 47k }')).toEqual(
      [...fed, 'diode load', 'diode bypass'].concat(['filter resistor', 'filter capacitor']),
    );
  });

  it('the kind of part gives the tolerance where the list states none', () => {
    const circuit = circuitOf('plate: { dropping resistor: 10k }');
    const shown = (age: 'old' | 'new'): Record<string, string> =>
      Object.fromEntries(
        tolerancedParts(circuit, stated('plate: { bypass: 1n ±20 % }'), age).map(({ key, tolerance }) => [
          key,
          toleranceText(tolerance),
        ]),
      );
    expect(shown('old')).toEqual({
      'detector.grid capacitor': '±10 %',
      'detector.leak': '-10/+30 %',
      'plate.bypass': '±20 %',
      'plate.load.resistance': '-10/+30 %',
      'output.coupling': '±10 %',
      'output.load resistance': '-10/+30 %',
      'detector.tube': '±25 %',
      'tube.grid current.at zero volts': '×/÷ 3',
      'plate.dropping resistor': '-10/+30 %',
      'plate.dropping capacitor': '±10 %',
    });
    expect(shown('new')).toMatchObject({
      'detector.leak': '±5 %',
      'detector.grid capacitor': '±5 %',
      'detector.tube': '±25 %',
    });
  });
});

/** Two circuits with the same parts, their numbers within a share of each other. */
function expectAlike(found: unknown, wanted: unknown, within: number, path = 'circuit'): void {
  if (typeof wanted === 'number' && wanted !== 0) {
    expect(Math.abs((found as number) / wanted - 1), path).toBeLessThan(within);
  } else if (typeof wanted === 'object' && wanted !== null) {
    for (const [key, value] of Object.entries(wanted)) {
      expectAlike((found as Record<string, unknown>)[key], value, within, `${path}.${key}`);
    }
  } else expect(found, path).toEqual(wanted);
}
