import { describe, expect, it } from 'vitest';
import { listVariants } from '../../src/list/variants.ts';
import { circuitDrawing } from '../../src/page/circuit-drawing.ts';
import { costliest, inWords } from '../../src/page/in-words.ts';
import { partValues, steppedText, valueText } from '../../src/page/part-values.ts';
import { partsListText } from '../../src/page/parts-list-text.ts';
import type { CircuitRecord } from '../../src/results/result.ts';
import { sampleVariant } from '../exact/sample-result.ts';

describe('what it says in words', () => {
  it('compares the brightest with the dullest by the figures', () => {
    const [dull, bright] = [sampleVariant('as found', 60, 1500), sampleVariant('restored', 60, 6000)];
    const at = (hertz: number, variant: typeof dull): number =>
      variant.response.find((row) => row.hertz === hertz)!.decibels;
    const apart = (at(5000, bright) - at(5000, dull)).toFixed(1);
    const words = inWords([dull, bright]);
    expect(words[0]).toBe(`‘restored’ is ${apart} dB brighter at 5 kHz than ‘as found’ and as loud.`);
    // of the invented costs the plate bypass has the largest share
    const share = 0.8 * 10 * Math.log10((1 + (5000 / 1500) ** 2) / (1 + (5000 / 6000) ** 2));
    expect(words[1]).toBe(`The plate bypass alone accounts for ${share.toFixed(1)} dB of the difference.`);
    expect(inWords([bright, dull])).toEqual(words);
  });

  it('says of one variant where it falls and by what, and of like ones that they are alike', () => {
    const one = sampleVariant('as drawn', 60, 1500);
    expect(inWords([one])[0]).toMatch(/^‘as drawn’ is 3 dB down at 1\.5 kHz and \d+\.\d dB down at 5 kHz\.$/);
    expect(inWords([one])[1]).toMatch(/^The plate bypass costs most there: \d+\.\d dB\.$/);
    expect(inWords([one, { ...one, name: 'copy' }])[0]).toMatch(/^In treble the variants are alike/);
    expect(inWords([])).toEqual([]);
    expect(costliest({ tunedCircuit: -1, gridCapacitor: 0, plateBypass: -2, load: 0 })).toBe(null);
  });
});

describe('the values on the drawing', () => {
  const { circuit } = sampleVariant('x', 60, 3000);
  const part = (key: string, of: CircuitRecord = circuit) => partValues(of).find((one) => one.key === key)!;

  it('step through preferred values, and further for a decade', () => {
    const bypass = part('plate.bypass');
    expect(valueText(circuit, bypass)).toBe('100 pF');
    expect([1, 2, -1, 12, -12].map((steps) => steppedText(circuit, bypass, steps))).toEqual([
      '120 pF',
      '150 pF',
      '82 pF',
      '1 nF',
      '10 pF',
    ]);
    expect(steppedText(circuit, part('plate.supply'), 1)).toBe('112.5 V');
    expect(steppedText(circuit, part('plate.supply'), -1)).toBe('67.5 V');
    expect(steppedText(circuit, part('station.level'), 1)).toBe('100 mV');
    expect(steppedText(circuit, part('station.level'), -1)).toBe('50 mV');
    expect(steppedText(circuit, part('station.modulation'), 1)).toBe('90 %');
    expect(steppedText(circuit, part('station.carrier'), 1)).toBe('930 kHz');
  });

  it('are absent where nothing is there, and come back by a step up', () => {
    const without = { ...circuit, plate: { ...circuit.plate, bypassFarads: 0 } };
    expect(valueText(without, part('plate.bypass', without))).toBe('absent');
    expect(steppedText(without, part('plate.bypass', without), 1)).toBe('10 pF');
    expect(steppedText(without, part('plate.bypass', without), -1)).toBe(null);
  });

  it('stand each once on the drawing or beside it, and the costliest part is framed', () => {
    const svg = circuitDrawing(circuit, 'Circuit of <x>', { part: 'plateBypass' });
    const drawn = [...svg.matchAll(/data-key="([^"]+)"/g)].map((match) => match[1]!);
    expect(new Set(drawn).size).toBe(drawn.length);
    const known = partValues(circuit).map(({ key }) => key);
    expect(drawn.filter((key) => !known.includes(key))).toEqual([]);
    expect(svg.match(/class="mark"/g)).toHaveLength(1);
    expect(svg).toContain('aria-label="Circuit of &lt;x&gt;"');
    expect(circuitDrawing(circuit, 'x', null)).not.toContain('class="mark"');
  });
});

describe('the parts list as YAML', () => {
  it('reads back as the same circuits', () => {
    const text = `name: 'a: b # c'
station: { carrier: 1 MHz }
tuned circuit: { coil: 180 µH, tap: 0.5 }
plate: { load: { kind: transformer, ratio: '1:3' }, supply: 90 V }
tube:
  rows:
    - { plate: 90 V, grid: -4.5 V, current: 2.5 mA, mu: 9.3, slope: 850 µmho }
    - { plate: 135 V, grid: -9 V, current: 3 mA, mu: 9.3, slope: 900 µmho }
variants:
  'no: 1': {}
  yes: { plate.bypass: 100p, plate.load: resistor 100k }
  'true': { plate.load.leakage: 0.2 H }
`;
    const listed = listVariants(text, 'list');
    const [first] = listed;
    const written = partsListText(
      first!.listName!,
      first!.layers[0]!,
      listed.map(({ name, layers }) => ({ name, layers: layers.slice(1) })),
    );
    const again = listVariants(written, 'again');
    expect(again.map(({ name, circuit, listName }) => ({ name, circuit, listName }))).toEqual(
      listed.map(({ name, circuit, listName }) => ({ name, circuit, listName })),
    );
  });
});
