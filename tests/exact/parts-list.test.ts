import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { InputError } from '../../src/engine/errors.ts';
import { gridAmps, plateAmps } from '../../src/engine/tubes/laws.ts';
import { starterList } from '../../src/list/starter.ts';
import { type ListedVariant, listVariants, type Setting } from '../../src/list/variants.ts';

/** A relative error that only arithmetic makes: a few roundings of 2^-53, about 1.1e-16 each. */
const ROUNDINGS = 1e-14;

const read = (text: string, settings: readonly Setting[] = []): ListedVariant[] =>
  listVariants(text, 'set.yaml', settings);
const circuit = (text: string): DetectorCircuit => read(text)[0]!.circuit;
const flag = (key: string, value: string): Setting => ({ key, value, where: `--set ${key}` });
const names = (variants: readonly ListedVariant[]): string[] => variants.map((variant) => variant.name);

/** Code, dotted key or flag and place of each fault, and no variant. */
function faultsOf(text: string, settings: readonly Setting[] = []): string[] {
  try {
    read(text, settings);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return error.faults.map(
      ({ code, where, line, column }) => `${code} ${where}${line === undefined ? '' : ` ${line}:${column}`}`,
    );
  }
  return [];
}

const relative = (found: number, wanted: number): number => Math.abs(found / wanted - 1);

describe('a parts list with nothing in it', () => {
  it.each(['', '\n', '# only a comment\n', '---\n', 'station:\nplate:\n', 'variants: {}', '\ufeff'])(
    '%j is the standard one-tube set',
    (text) => {
      const [variant, ...others] = read(text);
      expect(others).toEqual([]);
      expect(variant!.name).toBe('as drawn');
      expect(variant!.changes).toEqual({});
      const { tube, ...rest } = variant!.circuit;
      expect(tube.type).toBe('6SL7-GT');
      // the defaults a starter list shows, in base units; 1 MΩ and 80 pF stand for the next grid
      expect(rest).toMatchObject({
        station: { carrierHertz: 920e3, levelVoltsRms: 60e-3, modulation: 0.8 },
        tunedCircuit: { kind: 'coil', coilHenries: 200e-6, unloadedQ: 90, tap: 1, retuned: true, detuneHertz: 0 },
        detector: {
          kind: 'grid leak',
          law: 'tube',
          gridCapacitorFarads: 150e-12,
          leakOhms: 2.2e6,
          leakPosition: 'to cathode',
          leakReturnVolts: 0,
          capacitorLeakageOhms: null,
          chargeOhms: null,
        },
        plate: { supplyVolts: 90, bypassFarads: 220e-12, load: { kind: 'resistor', ohms: 220e3 } },
        output: { couplingFarads: 10e-9, loadOhms: 1e6, loadFarads: 80e-12 },
      });
      expect(variant!.sending).toMatchObject({ preEmphasis: 'none', channelLimit: 'none', side: 'both' });
    },
  );

  it('the starter list writes out those very defaults, and its variants change the bypass', () => {
    const [drawn, brighter, mellower] = read(starterList());
    expect(drawn!.circuit).toEqual(circuit(''));
    expect(brighter!.circuit).toEqual(circuit('plate: { bypass: 100p }'));
    expect(mellower!.circuit).toEqual(circuit('plate: { bypass: 2n2 }'));
    expect(names([drawn!, brighter!, mellower!])).toEqual(['as drawn', 'brighter', 'mellower']);
  });

  it('a name alone names the one variant', () => {
    expect(names(read('name: Set for the workshop'))).toEqual(['Set for the workshop']);
    expect(names(read('name: 1937'))).toEqual(['1937']);
  });
});

describe('words', () => {
  it('valve, anode and condenser are tube, plate and capacitor, in keys of sections, changes and flags', () => {
    const ours = 'detector: { tube: 76, grid capacitor: 250p }\nplate: { supply: 45 V }\nstrays: { grid to plate: 2p }';
    const theirs =
      'detector: { Valve: 76, grid condenser: 250p }\nanode: { supply: 45 V }\nstrays: { grid to anode: 2p }';
    expect(circuit(theirs)).toEqual(circuit(ours));
    const [changed] = read('variants:\n  a: { anode.supply: 45 V, detector: { grid condenser: 250p } }', [
      flag('detector.valve', '76'),
      flag('strays.grid to anode', '2p'),
    ]);
    expect(changed!.circuit).toEqual(circuit(ours));
    expect(changed!.changes).toEqual({
      'plate.supply': '45 V',
      'detector.grid capacitor': '250p',
      'detector.tube': '76',
      'strays.grid to plate': '2p',
    });
  });

  it('an own valve has anode rows', () => {
    const row = (plate: string, resistance: string): string =>
      `valve:\n  rows:\n    - { ${plate}: 250 V, grid: -13.5 V, current: 5 mA, mu: 13.8, ${resistance}: 9500 }`;
    expect(circuit(row('anode', 'anode resistance')).tube).toEqual(circuit(row('plate', 'plate resistance')).tube);
  });

  it('keys and choices are read in any case and spacing', () => {
    const plain = 'station: { pre-emphasis: nrsc-1, channel limit: 9 kHz, side: left }\ntuned circuit: { retune: no }';
    const loose =
      'Station: { PRE-EMPHASIS: NRSC-1, Channel  Limit: 9kHz, side: Left }\nTuned Circuit: { retune: False }';
    const [variant] = read(plain);
    // as they were written they differ; as they are understood they do not
    const understood = (found: typeof variant) => ({ ...found, layers: [] });
    expect(read(loose).map(understood)).toEqual([understood(variant)]);
    expect(variant!.sending).toMatchObject({ preEmphasis: 'nrsc-1', channelLimit: 'channel 9 kHz', side: 'left' });
    expect(variant!.circuit.tunedCircuit).toMatchObject({ retuned: false });
  });

  it('tube types that look like numbers stay what was written', () => {
    expect(circuit('detector: { tube: 27 }').tube.type).toBe('27');
    expect(
      circuit('detector: { tube: 056 }\ntube: { rows: [ { plate: 90, grid: -5, current: 3m, mu: 9, slope: 900u } ] }')
        .tube.type,
    ).toBe('056');
    expect(
      circuit('detector: { tube: 6E5 }\ntube: { rows: [ { plate: 90, grid: -5, current: 3m, mu: 9, slope: 900u } ] }')
        .tube.type,
    ).toBe('6E5');
  });
});

describe('how a list may be written', () => {
  const wanted = circuit('station:\n  level: 5 mV\nplate:\n  bypass: 100p\n');

  it.each([
    ['line ends of Windows', 'station:\r\n  level: 5 mV\r\nplate:\r\n  bypass: 100p\r\n'],
    ['a byte-order mark', '\ufeffstation:\n  level: 5 mV\nplate:\n  bypass: 100p\n'],
    ['mappings on one line', '{ station: { level: 5 mV }, plate: { bypass: 100p } }'],
    ['quotes', '"station":\n  \'level\': "5 mV"\nplate:\n  bypass: \'100p\'\n'],
    ['plain numbers in base units', 'station: { level: 0.005 }\nplate: { bypass: 100e-12 }'],
    ['one value used twice by an anchor', 'station: { level: &five 5 mV }\nplate: { bypass: 100p, supply: 90 }'],
    ['a YAML 1.1 mark', '%YAML 1.1\n---\nstation: { level: 5 mV }\nplate: { bypass: 100p }'],
  ])('%s', (_, text) => {
    expect(circuit(text)).toEqual(wanted);
  });

  it('an alias repeats what its anchor has, changes of variants too', () => {
    const [first, second] = read('variants:\n  a: &changes { plate.bypass: 100p, station.level: 5 mV }\n  b: *changes');
    expect(second!.circuit).toEqual(first!.circuit);
    expect(second!.changes).toEqual({ 'plate.bypass': '100p', 'station.level': '5 mV' });
  });
});

describe('changes of a variant', () => {
  it('dotted keys, sections and any mixture give the same', () => {
    const [dotted, nested, mixed] = read(`variants:
  dotted: { plate.bypass: 100p, plate.load: 47k, tuned circuit.unloaded Q: 120, tube.grid current.at zero volts: 1 µA }
  nested:
    plate: { bypass: 100p, load: 47k }
    tuned circuit: { unloaded Q: 120 }
    tube: { grid current: { at zero volts: 1 µA } }
  mixed: { plate: { bypass: 100p }, plate.load: 47k, tuned circuit.unloaded Q: 120, tube: { grid current.at zero volts: 1 µA } }`);
    expect(nested!.circuit).toEqual(dotted!.circuit);
    expect(mixed!.circuit).toEqual(dotted!.circuit);
    expect(nested!.changes).toEqual(dotted!.changes);
    expect(dotted!.circuit.plate).toMatchObject({
      supplyVolts: 90,
      bypassFarads: 100e-12,
      load: { kind: 'resistor', ohms: 47e3 },
    });
  });

  it('stand over the sections above, and leave the rest of them', () => {
    const [as, changed] = read('plate: { bypass: 1n, supply: 45 V }\nvariants:\n  as drawn:\n  b: { plate.bypass: 0 }');
    expect(as!.circuit.plate).toMatchObject({ bypassFarads: 1e-9, supplyVolts: 45 });
    expect(changed!.circuit.plate).toMatchObject({ bypassFarads: 0, supplyVolts: 45 });
  });

  it('are kept as they were written', () => {
    const [variant] = read(
      'variants:\n  a: { plate.bypass: 0.10 nF, detector.leak: 2M2, station.level: 1.50, plate.load: "resistor  22 kΩ", plate.supply: 45 V }',
      [flag('plate.supply', '90 V')],
    );
    expect(variant!.changes).toEqual({
      'plate.bypass': '0.10 nF',
      'detector.leak': '2M2',
      'station.level': '1.50',
      'plate.load': 'resistor  22 kΩ',
      'plate.supply': '90 V',
    });
    expect(Object.keys(variant!.changes).at(-1)).toBe('plate.supply');
  });
});

describe('a plate load', () => {
  it.each([
    'load: resistor 47 kΩ',
    'load: 47k',
    'load: Resistor 47000',
    'load: { kind: resistor, resistance: 47k }',
    'load: { resistance: 47k }',
    'load:\n    kind: resistor\n    resistance: 47 kohm',
  ])('%s', (text) => {
    expect(circuit(`plate:\n  ${text}\n`).plate.load).toEqual({ kind: 'resistor', ohms: 47e3 });
  });

  it.each(['load: resistor', 'load: { kind: resistor }'])('%s is one of 220 kΩ', (text) => {
    expect(circuit(`plate:\n  ${text}\n`).plate.load).toEqual({ kind: 'resistor', ohms: 220e3 });
  });

  it('is swapped as a whole by a line, and changed in one value by a dotted key', () => {
    const ohms = read(`plate: { load: { kind: resistor, resistance: 100k } }
variants:
  swapped: { plate.load: resistor }
  on a line: { plate.load: resistor 56k }
  one value: { plate.load.resistance: 68k }
  mapping: { plate.load: { resistance: 82k } }`).map((variant) => variant.circuit.plate.load);
    expect(ohms).toEqual([220e3, 56e3, 68e3, 82e3].map((value) => ({ kind: 'resistor', ohms: value })));
  });
});

describe('the tuned circuit', () => {
  it('a loaded Q alone is a stiff source', () => {
    expect(circuit('tuned circuit: { loaded Q: 40, detune: 2 kHz }').tunedCircuit).toEqual({
      kind: 'stiff',
      loadedQ: 40,
      detuneHertz: 2000,
    });
  });

  it('a tuning capacitor in place of the coil gives the coil that resonates with it', () => {
    const { tunedCircuit } = circuit(
      'station: { carrier: 1 MHz }\ntuned circuit: { capacitor: 100 pF, unloaded Q: 60, tap: 0.5 }',
    );
    // Thomson's formula L = 1/(ω²C) by hand: (2π·10⁶)² = 3.947842e13, over 100 pF gives 253.3030 µH to the digits shown
    expect(tunedCircuit).toMatchObject({ kind: 'coil', unloadedQ: 60, tap: 0.5 });
    expect(relative((tunedCircuit as { coilHenries: number }).coilHenries, 253.303e-6)).toBeLessThan(2e-7);
  });

  it('a variant may change the one for the other, either way', () => {
    const kinds = read(`tuned circuit: { coil: 150 µH, unloaded Q: 60 }
variants:
  stiff: { tuned circuit.loaded Q: 30 }
  from a capacitor: { tuned circuit.capacitor: 150p }`).map((variant) => variant.circuit.tunedCircuit);
    expect(kinds[0]).toEqual({ kind: 'stiff', loadedQ: 30, detuneHertz: 0 });
    // ω = 2π·920 kHz: 1/(ω²·150 pF) = 199.514 µH by hand, to the digits shown; the Q stays
    expect(kinds[1]).toMatchObject({ kind: 'coil', unloadedQ: 60 });
    expect(relative((kinds[1] as { coilHenries: number }).coilHenries, 199.514e-6)).toBeLessThan(5e-6);
    const [back] = read('tuned circuit: { loaded Q: 40 }\nvariants:\n  built: { tuned circuit.coil: 200u }');
    expect(back!.circuit.tunedCircuit).toMatchObject({ kind: 'coil', coilHenries: 200e-6, unloadedQ: 90 });
  });

  it('both at once contradict', () => {
    expect(faultsOf('tuned circuit:\n  loaded Q: 40\n  coil: 200 µH')).toEqual([
      'two-tuned-circuits tuned circuit.coil 3:9',
    ]);
    expect(faultsOf('tuned circuit:\n  coil: 200 µH\n  capacitor: 150p')).toEqual([
      'coil-and-capacitor tuned circuit.capacitor 3:14',
    ]);
  });
});

describe('the leak', () => {
  it('none, with a capacitor that leaks: the leakage is the leak, across the capacitor', () => {
    const { detector } = circuit('detector: { leak: none, grid capacitor leakage: 100 MΩ }');
    expect(detector).toMatchObject({ leakOhms: 100e6, leakPosition: 'across capacitor', capacitorLeakageOhms: null });
  });

  it('beside a leakage both stay', () => {
    const { detector } = circuit('detector: { leak: 1M, grid capacitor leakage: 100 MΩ }');
    expect(detector).toMatchObject({ leakOhms: 1e6, leakPosition: 'to cathode', capacitorLeakageOhms: 100e6 });
  });

  it('none at all is refused: the grid would stay charged', () => {
    expect(faultsOf('detector:\n  leak: none')).toEqual(['no-leak detector.leak 2:9']);
  });

  it.each([
    // the 01-A has a filament of 5 V (RCA Receiving Tube Manual, from memory), the 30 one of 2 V (the same)
    ['01-A', 'cathode', '', 0],
    ['01-A', 'filament -', '', 0],
    ['01-A', 'filament +', '', 5],
    ['01-A', 'filament+', '', 5],
    ['01-A', 'filament \u2212', '', 0],
    ['30', 'filament +', '', 2],
    ['30', 'filament +', 'tube: { filament: 1.8 V }', 1.8],
  ])('of a %s to %s %s returns to %d %s', (tube, returns, more, volts) => {
    const { detector } = circuit(`detector: { tube: ${tube}, leak returns to: ${returns} }\n${more}`);
    expect(detector.leakReturnVolts).toBe(volts);
  });

  it('has no filament to return to where the tube has a heater', () => {
    expect(faultsOf('detector:\n  tube: 76\n  leak returns to: filament +')).toEqual([
      'no-filament detector.leak returns to 3:20',
    ]);
  });
});

describe("a builder's own tube", () => {
  /** The 76 at 250 and at 100 V (RCA Receiving Tube Manual, from memory). */
  const ROW_250 = '{ plate: 250 V, grid: -13.5 V, current: 5 mA, mu: 13.8, slope: 1450 µmho }';
  const ROW_100 = '{ plate: 100 V, grid: -5 V, current: 2.5 mA, mu: 13.8, slope: 1.15 mA/V }';
  const own = (rows: string, more = ''): DetectorCircuit =>
    circuit(`detector: { tube: My 76 }\ntube:\n  rows: [ ${rows} ]\n${more}`);

  it('meets the row nearest the supply, or the row that is named', () => {
    const low = own(`${ROW_100}, ${ROW_250}`).tube;
    expect(low.type).toBe('My 76');
    // the fit is one of roots found to the last digits; 1e-9 is far below what any sheet prints
    expect(relative(plateAmps(low.law, -5, 100), 2.5e-3)).toBeLessThan(1e-9);
    const high = own(`${ROW_100}, ${ROW_250}`, '  fit at plate volts: 250 V').tube;
    expect(relative(plateAmps(high.law, -13.5, 250), 5e-3)).toBeLessThan(1e-9);
    expect(high.law.mu).toBe(13.8);
  });

  it('gives the law of the catalogue for the rows of the catalogue', () => {
    expect(own(`${ROW_100}, ${ROW_250}`).tube.law).toEqual(circuit('detector: { tube: 76 }').tube.law);
  });

  it('needs two of mu, slope and plate resistance', () => {
    const law = own('{ plate: 250, grid: -13.5, current: 5m, mu: 14.5, slope: 1450u }').tube.law;
    const others = ['mu: 14.5, plate resistance: 10k', 'slope: 1450 µS, plate resistance: 10k'].map(
      (two) => own(`{ plate: 250, grid: -13.5, current: 5m, ${two} }`).tube.law,
    );
    // mu = slope · plate resistance, exactly 14.5 here, so that only roundings differ
    for (const other of others) {
      for (const key of ['G', 'C', 'gamma', 'mu', 'phi'] as const) {
        expect(relative(other[key], law[key])).toBeLessThan(1e-11);
      }
    }
    expect(faultsOf('tube:\n  rows:\n    - { plate: 250, grid: -13.5, current: 5m, mu: 14 }')).toEqual([
      'row-incomplete tube.rows.0 3:7',
    ]);
  });

  it('is told which row, and which value in it, is wrong', () => {
    const rows = (third: string): string => `tube:\n  rows:\n    - ${ROW_100}\n    - ${ROW_250}\n    - ${third}`;
    expect(faultsOf(rows('{ plate: 90, grid: -5, current: 2 mV, mu: 14, slope: 1m }'))).toEqual([
      'wrong-unit tube.rows.2.current 5:39',
    ]);
    expect(faultsOf(rows('{ plate: 90, grid: -5, mu: 14, slope: 1m }'))).toEqual([
      'wrong-value tube.rows.2.current 5:7',
    ]);
    expect(faultsOf(rows('{ plate: 90, grid: -5, current: 2m, mu: 14, plate resistance: 1k, slope: 1m }'))).toEqual([
      'row-inconsistent tube.rows.2 5:7',
    ]);
    expect(faultsOf(rows('{ plate: 90, grid: -5, current: 2m, mu: 14, slope: 1m, slop: 1m }'))).toEqual([
      'unknown-key tube.rows.2.slop 5:62',
    ]);
    expect(faultsOf(`${rows(ROW_100)}\n  fit at plate volts: 99 V`)).toEqual([
      'unknown-row tube.fit at plate volts 6:23',
    ]);
  });

  it('has the capacitances stated, the strays of socket and wiring added', () => {
    const { tube } = own(
      ROW_250,
      '  capacitances: { grid to plate: 2p, grid to cathode: 3p, plate to cathode: 4p }\nstrays: { grid to plate: 1p, grid: 5p, plate: 0 }',
    );
    expect(relative(tube.gridPlateFarads, 3e-12)).toBeLessThan(ROUNDINGS);
    expect(relative(tube.gridCathodeFarads, 8e-12)).toBeLessThan(ROUNDINGS);
    expect(relative(tube.plateCathodeFarads, 4e-12)).toBeLessThan(ROUNDINGS);
  });
});

describe('the grid current', () => {
  it('of two readings of the free grid lies on both', () => {
    const { law } = circuit(
      'tube: { grid current: { readings: [ { grid: -0.35 V, leak: 1 MΩ }, { grid: -0.55 V, leak: 10 MΩ } ] } }',
    ).tube;
    // Ohm's law: what flows in the leak is what the grid draws; the fit promises 1e-9 of the current
    expect(relative(gridAmps(law, -0.35), 0.35 / 1e6)).toBeLessThan(1e-9);
    expect(relative(gridAmps(law, -0.55), 0.55 / 10e6)).toBeLessThan(1e-9);
  });

  it('of readings with a return is counted from there', () => {
    const { law } = circuit(
      'tube: { grid current: { readings: [ { grid: 0 V, leak: 1 MΩ, leak returns to: 2 V }, { grid: -0.2 V, leak: 5 MΩ } ] } }',
    ).tube;
    expect(relative(gridAmps(law, 0), 2 / 1e6)).toBeLessThan(1e-9);
    expect(relative(gridAmps(law, -0.2), 0.2 / 5e6)).toBeLessThan(1e-9);
  });

  it('may be stated at zero volts', () => {
    const { law } = circuit('tube: { grid current: { at zero volts: 4 µA, thermal voltage: 0.1 V } }').tube;
    expect(relative(gridAmps(law, 0), 4e-6)).toBeLessThan(1e-12);
    // far below zero one thermal voltage is one e-fold (Boltzmann); 2 V below, e^-20 of bend is left
    expect(relative(gridAmps(law, -2) / gridAmps(law, -2.1), Math.E)).toBeLessThan(1e-5);
  });

  it('readings that cannot be are told with their place', () => {
    const readings = (...two: string[]): string =>
      `tube:\n  grid current:\n    readings:\n${two.map((one) => `      - { ${one} }\n`).join('')}`;
    expect(faultsOf(readings('grid: -0.3, leak: 1M', 'grid: 0.2, leak: 3M'))).toEqual([
      'grid-reading-not-positive tube.grid current.readings.1 5:9',
    ]);
    expect(faultsOf(readings('grid: -0.3, leak: 1M', 'grid: -0.3, leak: 3M'))).toEqual([
      'grid-readings-alike tube.grid current.readings 4:7',
    ]);
    expect(faultsOf(readings('grid: -0.3, leak: 1M'))).toEqual(['wrong-value tube.grid current.readings 4:7']);
    expect(faultsOf(`${readings('grid: -0.3, leak: 1M', 'grid: -0.5, leak: 3M')}    at zero volts: 1u`)).toEqual([
      'two-grid-laws tube.grid current.readings 4:7',
    ]);
  });
});

describe('what the stage feeds', () => {
  it('has its own resistance and capacitance, unless the list states them', () => {
    expect(circuit('output: { into: crystal earpiece, coupling: 0.1 µF }').output).toMatchObject({
      couplingFarads: 0.1e-6,
      loadOhms: 20e6,
      loadFarads: 500e-12,
    });
    expect(circuit('output: { load resistance: 470k, load capacitance: 0 }').output).toMatchObject({
      couplingFarads: 10e-9,
      loadOhms: 470e3,
      loadFarads: 0,
    });
  });
});

describe('flags', () => {
  const BYPASSES = 'variants:\n  a: { plate.bypass: 1n }\n  b: { plate.bypass: 2n, detector.leak: 1M }\n';

  it('stand over the list and over every variant', () => {
    const variants = read(BYPASSES, [flag('plate.supply', '45')]);
    expect(names(variants)).toEqual(['a', 'b']);
    expect(variants.map((variant) => variant.circuit.plate.supplyVolts)).toEqual([45, 45]);
    expect(variants[0]!.changes).toEqual({ 'plate.bypass': '1n', 'plate.supply': '45' });
  });

  it('over the key that told the variants apart leave those that still differ', () => {
    const variants = read(BYPASSES, [flag('plate.bypass', '100p')]);
    expect(names(variants)).toEqual(['a', 'b']);
    expect(variants.map((variant) => variant.changes)).toEqual([
      { 'plate.bypass': '100p' },
      { 'detector.leak': '1M', 'plate.bypass': '100p' },
    ]);
    expect(names(read(BYPASSES, [flag('plate.bypass', '100p'), flag('detector.leak', '2M')]))).toEqual(['a']);
    expect(names(read('variants:\n  a: { plate.load.resistance: 47k }\n  b: {}', [flag('plate.load', '22k')]))).toEqual(
      ['a'],
    );
  });

  it('with comma lists multiply, with each other and with the variants', () => {
    expect(names(read('', [flag('plate.bypass', '47p, 100p,250p')]))).toEqual([
      'bypass 47p',
      'bypass 100p',
      'bypass 250p',
    ]);
    const variants = read('variants:\n  a: {}\n  b: { plate.supply: 45 }', [
      flag('detector.leak', '1M,2M'),
      flag('plate.bypass', '47p,100p'),
      flag('station.level', '5 mV'),
    ]);
    expect(names(variants)).toEqual([
      'a, leak 1M, bypass 47p',
      'a, leak 1M, bypass 100p',
      'a, leak 2M, bypass 47p',
      'a, leak 2M, bypass 100p',
      'b, leak 1M, bypass 47p',
      'b, leak 1M, bypass 100p',
      'b, leak 2M, bypass 47p',
      'b, leak 2M, bypass 100p',
    ]);
    const { circuit: last, changes } = variants.at(-1)!;
    expect([
      last.detector.leakOhms,
      last.plate.bypassFarads,
      last.plate.supplyVolts,
      last.station.levelVoltsRms,
    ]).toEqual([2e6, 100e-12, 45, 5e-3]);
    expect(changes).toEqual({
      'plate.supply': '45',
      'detector.leak': '2M',
      'plate.bypass': '100p',
      'station.level': '5 mV',
    });
  });

  it('a value given twice is one, and of two flags for one key the later stands', () => {
    expect(names(read('', [flag('plate.bypass', '47p,47p')]))).toEqual(['as drawn']);
    const variants = read('', [flag('plate.bypass', '1p,2p'), flag('plate.bypass', '3n,4n')]);
    expect(names(variants)).toEqual(['bypass 3n', 'bypass 4n']);
    expect(variants[0]!.circuit.plate.bypassFarads).toBe(3e-9);
  });

  it('that are wrong are named, not a place in the list', () => {
    expect(faultsOf('plate: { bypass: 1n }', [flag('plate.bypass', '100 kHz')])).toEqual([
      'wrong-unit --set plate.bypass',
    ]);
    expect(faultsOf('', [flag('plate.bypas', '1n')])).toEqual(['unknown-key --set plate.bypas']);
    expect(faultsOf('', [flag('plate', '1n')])).toEqual(['unknown-key --set plate']);
    expect(faultsOf('', [flag('plate.bypass', '1n,,2n')])).toEqual(['no-value --set plate.bypass']);
    expect(faultsOf('', [flag('plate.load', 'gyrator 5')])).toEqual(['unknown-load --set plate.load']);
    expect(faultsOf('', [flag('detector.tube', '76x')])).toEqual(['unknown-tube --set detector.tube']);
    expect(faultsOf('', [flag('detector.leak returns to', 'filament +')])).toEqual([
      'no-filament --set detector.leak returns to',
    ]);
  });
});

describe('how many variants, and their names', () => {
  const many = (count: number): string => Array.from({ length: count }, (_, n) => `${n + 1}p`).join(',');

  it('24 are a run, 25 are not, and a flood of them costs nothing', () => {
    expect(read('', [flag('plate.bypass', many(24))])).toHaveLength(24);
    expect(faultsOf('', [flag('plate.bypass', many(25))])).toEqual(['too-many-variants set.yaml']);
    expect(faultsOf('variants: { a: , b: { plate.supply: 45 } }', [flag('plate.bypass', many(13))])).toEqual([
      'too-many-variants set.yaml',
    ]);
    const keys = [
      'plate.bypass',
      'plate.supply',
      'detector.leak',
      'station.level',
      'station.modulation',
      'output.coupling',
    ];
    // 100^6 drafts, were they made before they are counted, would never end
    expect(
      faultsOf(
        '',
        keys.map((key) => flag(key, many(100))),
      ),
    ).toEqual(['too-many-variants set.yaml']);
  });

  it('24 of a list that one flag makes alike are one', () => {
    const list = `variants:\n${many(24)
      .split(',')
      .map((value) => `  b${value}: { plate.bypass: ${value} }\n`)
      .join('')}`;
    expect(names(read(list, [flag('plate.bypass', '1n,2n')]))).toEqual(['b1p, bypass 1n', 'b1p, bypass 2n']);
  });

  it.each([
    ['the very same', 'a', 'a'],
    ['letter case', 'Brighter', 'bRIGHTER'],
    ['composed and decomposed letters', '\u00e9tude', 'e\u0301tude'],
    ['wide letters', 'A1', '\uff211'],
    ['space', 'as found', '"as  found "'],
  ])('two of one name by %s are refused', (_, first, second) => {
    expect(faultsOf(`variants:\n  ${first}: {}\n  ${second}: { plate.bypass: 1n }`)).toEqual([
      'same-name variants 3:3',
    ]);
  });

  it('two values that name their variants alike are told by their flag', () => {
    expect(faultsOf('', [flag('plate.bypass', '1n,1N')])).toEqual(['same-name --set plate.bypass']);
  });

  it('a name is one plain line of 1 to 80 characters', () => {
    expect(names(read('variants:\n  "a\\e[2J\\nb\\u202ec": {}'))).toEqual(['a [2J b c']);
    for (const name of ['""', '"  "', '"\\x07"', 'x'.repeat(81), '[a, b]', '{a: b}', '~']) {
      expect(faultsOf(`variants:\n  ? ${name}\n  : {}`)).toEqual(['bad-name variants 2:5']);
      expect(faultsOf(`name: ${name}`)).toEqual(
        ['bad-name name 1:7'].map((text) => (name === '~' || name === '""' ? 'bad-name name 1:1' : text)),
      );
    }
    expect(names(read(`variants:\n  ${'x'.repeat(80)}: {}`))).toEqual(['x'.repeat(80)]);
  });
});

describe('every fault is told at once, each with its place', () => {
  it('unknown and repeated keys, with the nearest known one', () => {
    const text =
      'staton:\n  level: 1\nplate:\n  bypas: 1n\n  supply: 90\n  Supply: 45\nvariants:\n  a: { plate.bypasss: 1n, plate: 5, plate.supply: 1, plate.supply: 2 }\n  b: 5\n';
    expect(faultsOf(text)).toEqual([
      'unknown-key staton 1:1',
      'unknown-key plate.bypas 4:3',
      'given-twice plate.supply 6:3',
      'unknown-key variants.a.plate.bypasss 8:8',
      'wrong-kind variants.a.plate 8:34',
      'given-twice variants.a.plate.supply 8:54',
      'wrong-kind variants.b 9:6',
    ]);
    try {
      read(text);
    } catch (error) {
      const hints = (error as InputError).faults.map((fault) => [fault.file, fault.hint]);
      expect(hints.slice(0, 4)).toEqual([
        ['set.yaml', 'nearest: station'],
        ['set.yaml', 'nearest: bypass'],
        ['set.yaml', undefined],
        ['set.yaml', 'nearest: plate.bypass'],
      ]);
    }
  });

  it('wrong values, of sections and variants, the shared ones once', () => {
    expect(faultsOf('station:\n  level: 60 mA\ndetector:\n  law: cubic\n  grid capacitor:\nplate: 90 V')).toEqual([
      'no-value detector.grid capacitor 5:3',
      'wrong-kind plate 6:8',
    ]);
    expect(
      faultsOf(
        'station:\n  level: 60 mA\ndetector:\n  law: cubic\nvariants:\n  a: { plate.bypass: 1 V }\n  b:\n    plate:\n      supply: [1, 2]',
      ),
    ).toEqual([
      'wrong-unit station.level 2:10',
      'wrong-value detector.law 4:8',
      'wrong-unit plate.bypass 6:22',
      'wrong-value plate.supply 9:15',
    ]);
  });

  it.each([
    ['no YAML', 'plate: [1,', 'not-yaml parts list'],
    ['tabs', 'plate:\n\tbypass: 1n', 'not-yaml parts list 2:1'],
    ['two documents', 'name: a\n---\nname: b\n', 'not-yaml parts list 2:1'],
    ['two keys on a line', 'name: a: b', 'not-yaml parts list 1:7'],
    ['an alias of nothing', 'plate: *none', 'unknown-alias parts list 1:8'],
    ['words', 'hello', 'not-a-list parts list 1:1'],
    ['a row', '- a\n- b', 'not-a-list parts list 1:1'],
    ['sections within sections', `plate: ${'['.repeat(100_000)}`, 'too-large parts list 1:'],
    ['rows within rows', `plate:\n  ${'- '.repeat(50_000)}a`, 'too-large parts list 2:'],
    ['a flood of keys', Array.from({ length: 20_000 }, (_, n) => `k${n}: 1`).join('\n'), 'too-large parts list'],
    ['a flood of text', `name: ${'x'.repeat(200_000)}`, 'too-large parts list 1:1'],
    ['a row that holds itself', 'tube:\n  rows: &rows\n    - *rows\n', 'too-large tube.rows'],
  ])('%s', (_, text, start) => {
    const faults = faultsOf(text);
    expect(faults.length).toBeGreaterThan(0);
    expect(faults[0]!.startsWith(start)).toBe(true);
  });

  it('aliases that multiply end where a list of ordinary size does', () => {
    const levels = ['b', 'c', 'd', 'e', 'f', 'g', 'h', 'i'];
    const bomb = levels
      .map((name, n) => `    - &${name} [${Array(9).fill(`*${'abcdefghi'[n]}`).join(', ')}]\n`)
      .join('');
    // 9^8 values, were they all followed
    expect(faultsOf(`tube:\n  rows:\n    - &a [x, x, x, x, x, x, x, x, x]\n${bomb}`)).toHaveLength(1);
  });

  it('at most fifty of them', () => {
    const text = `plate:\n${Array.from({ length: 500 }, (_, n) => `  wrong${n}: 1\n`).join('')}`;
    expect(faultsOf(text)).toHaveLength(50);
  });
});
