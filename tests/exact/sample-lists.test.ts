import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { responseRows, totalPercent } from '../../src/engine/circuits/analysis.ts';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { magnitude } from '../../src/engine/circuits/complex.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { steadyTone } from '../../src/engine/circuits/steady-state.ts';
import { listVariants } from '../../src/list/variants.ts';

const sampleText = (name: string): string => readFileSync(new URL(`../../samples/${name}`, import.meta.url), 'utf8');

describe('the parts lists', () => {
  const decibelsAt5000 = (name: string): Map<string, number> =>
    new Map(
      listVariants(sampleText(name), name).map((variant) => {
        const response = responseRows(restPoint(variant.circuit));
        return [variant.name, response.find((row) => row.hertz === 5000)!.decibels];
      }),
    );

  it.each([
    'first-one-tube-set.yaml',
    'strong-station.yaml',
    'restoration.yaml',
    'plate-loads.yaml',
    'crowded-evening.yaml',
    'morse.yaml',
  ])('%s opens with the shock caution', (name) => {
    expect(sampleText(name)).toMatch(/^# SHOCK: /);
  });

  it('the bypasses of the first set differ by what anyone hears', () => {
    const decibels = decibelsAt5000('first-one-tube-set.yaml');
    expect([...decibels.keys()]).toEqual(['brighter', 'as drawn', 'mellow']);
    // 3 dB: three times the smallest step an ear notices in a band of treble (common practice, no source)
    expect(decibels.get('brighter')! - decibels.get('as drawn')!).toBeGreaterThan(3);
    expect(decibels.get('as drawn')! - decibels.get('mellow')!).toBeGreaterThan(3);
  });

  it("the strong station's leaks differ in distortion of loud treble, and the low supply overloads", () => {
    const total = new Map(
      listVariants(sampleText('strong-station.yaml'), 'strong-station.yaml').map(({ name, circuit }) => [
        name,
        totalPercent(steadyTone(restPoint(circuit), 1000, 0.8)),
      ]),
    );
    expect([...total.keys()]).toEqual(['power leak', 'weak-signal leak', 'low supply']);
    // twice and more: what the list's comments promise must not hang on a hair
    expect(total.get('weak-signal leak')!).toBeGreaterThan(2 * total.get('power leak')!);
    expect(total.get('low supply')!).toBeGreaterThan(2 * total.get('weak-signal leak')!);
  });

  it('the restored set sounds as drawn, and the set as found far duller', () => {
    const decibels = decibelsAt5000('restoration.yaml');
    expect([...decibels.keys()]).toEqual(['as found', 'as drawn', 'restored']);
    // 1 dB: the smallest step an ear notices in a band of treble (common practice, no source)
    expect(Math.abs(decibels.get('restored')! - decibels.get('as drawn')!)).toBeLessThan(1);
    expect(decibels.get('as drawn')! - decibels.get('as found')!).toBeGreaterThan(3);
  });

  it('the plate loads sound alike in the treble, each louder than the last, the transformer by far', () => {
    const decibels = decibelsAt5000('plate-loads.yaml');
    expect([...decibels.keys()]).toEqual(['22 kΩ', '56 kΩ', '120 kΩ', 'choke', 'transformer']);
    const levels = [...decibels.values()];
    // 0.5 dB: half of what an ear notices (common practice, no source), and what the steps of E6 leave
    expect(Math.max(...levels) - Math.min(...levels)).toBeLessThan(0.5);
    const loudness = listVariants(sampleText('plate-loads.yaml'), 'plate-loads.yaml').map(({ circuit }) => {
      const { output } = new LinearResponse(restPoint(circuit)).at(400);
      return 20 * Math.log10(magnitude(output));
    });
    expect(loudness).toEqual([...loudness].sort((a, b) => a - b));
    // 8 dB: a step-up of 1:3 is 9.5 dB, less what its losses take
    expect(loudness[4]! - loudness[3]!).toBeGreaterThan(8);
  });

  it('the bypass of 22 kΩ on 120 kΩ takes more than 2 dB of it', () => {
    const variants = listVariants(sampleText('plate-loads.yaml'), 'plate-loads.yaml');
    const [low, , high] = variants.map(({ circuit }) => circuit);
    const { bypassFarads } = low!.plate;
    const swapped = { ...high!, plate: { ...high!.plate, bypassFarads } };
    const at5000 = (circuit: DetectorCircuit): number => new LinearResponse(restPoint(circuit)).decibels(5000);
    expect(at5000(high!) - at5000(swapped)).toBeGreaterThan(2);
  });
});
