import { readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { COMMON_METERS, meterName, socketRows } from '../../src/engine/circuits/meter-readings.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import type { InputError } from '../../src/engine/errors.ts';
import { readMeters } from '../../src/list/meter-words.ts';
import { listVariants } from '../../src/list/variants.ts';
import type { Result, VariantResult } from '../../src/results/result.ts';
import { socketTable } from '../../src/results/socket-table.ts';
import { freshFolder, ran } from './command-run.ts';
import { sampleVariant } from './sample-result.ts';

describe('meters as a builder says them', () => {
  it.each([
    ['11M', [{ kind: 'fixed', ohms: 11e6 }]],
    ['10 MΩ', [{ kind: 'fixed', ohms: 10e6 }]],
    ['20k/V', [{ kind: 'per volt', ohmsPerVolt: 20e3, rangeVolts: null }]],
    ['20k/V 50 V', [{ kind: 'per volt', ohmsPerVolt: 20e3, rangeVolts: 50 }]],
    ['1000 ohms per volt 250V', [{ kind: 'per volt', ohmsPerVolt: 1000, rangeVolts: 250 }]],
    ['5 kΩ/volt', [{ kind: 'per volt', ohmsPerVolt: 5000, rangeVolts: null }]],
    [
      '11M, 20k/V 2.5 V',
      [
        { kind: 'fixed', ohms: 11e6 },
        { kind: 'per volt', ohmsPerVolt: 20e3, rangeVolts: 2.5 },
      ],
    ],
  ])('%s', (written, meters) => {
    expect(readMeters(written, '--meter')).toEqual(meters);
  });

  it.each([
    ['', 'nothing', /such as 11M/],
    ['11M,', 'nothing', /such as 11M/],
    ['fine', 'fine', /ohms per volt such as 20k\/V/],
    ['20k/W', '20k/W', /such as 11M/],
    ['20k/V 50 A', '20k/V 50 A', /with its range as in/],
    ['1/V', '1/V', /100 Ω to 10 TΩ/],
    ['20k/V 0 V', '20k/V 0 V', /1 mV to 10 kV/],
  ])('%j is refused', (written, got, expected) => {
    expect.assertions(2);
    try {
      readMeters(written, '--meter');
    } catch (error) {
      const [fault] = (error as InputError).faults;
      expect([fault!.where, fault!.got]).toEqual(['--meter', got]);
      expect(fault!.expected).toMatch(expected);
    }
  });

  it('are called as they were said', () => {
    expect(COMMON_METERS.map(meterName)).toEqual(['10 MΩ', '20 kΩ/V', '1 kΩ/V']);
    expect(readMeters('11M,20k/V 50 V', '').map(meterName)).toEqual(['11 MΩ', '20 kΩ/V, 50 V']);
  });
});

/** Variants of a list with their socket rows, and nothing else computed. */
function variantsOf(text: string, meters = COMMON_METERS): VariantResult[] {
  return listVariants(`tuned circuit: { loaded Q: 40 }\n${text}`, 'set.yaml').map(({ name, circuit }) => ({
    ...sampleVariant(name, 50, 2000),
    socket: socketRows(restPoint(circuit), meters),
  }));
}

describe('the socket table', () => {
  it('has a row for every electrode and meter that differs, a column a variant', () => {
    const rows = socketTable(variantsOf('variants:\n  sound: {}\n  found: { fault: leaky coupling 2M }\n'));
    expect(rows.map(([name]) => name)).toEqual([
      'plate',
      'plate, by 10 MΩ',
      'plate, by 20 kΩ/V',
      'plate, by 1 kΩ/V',
      'grid',
      'grid, by 10 MΩ',
      'grid, by 20 kΩ/V',
      'grid, by 1 kΩ/V',
      'cathode',
      'supply at the load',
      'behind the coupling capacitor',
      'behind the coupling capacitor, by 10 MΩ',
      'behind the coupling capacitor, by 20 kΩ/V',
      'behind the coupling capacitor, by 1 kΩ/V',
    ]);
    const cells = new Map(rows.map(([name, ...rest]) => [name, rest]));
    expect(cells.get('supply at the load')).toEqual(['90 V', '90 V']);
    expect(cells.get('cathode')).toEqual(['0 V', '0 V']);
    const [sound, found] = cells.get('behind the coupling capacitor') as [string, string];
    expect([sound, /^7\.\d+ V$/.test(found)]).toEqual(['0 V', true]);
    expect(cells.get('behind the coupling capacitor, by 20 kΩ/V')![1]).toMatch(/^1\.\d+ V \(10 V\)$/);
    expect(cells.get('plate, by 1 kΩ/V')![0]).toMatch(/^[\d.]+ V \(25 V\)$/);
  });

  it('a leaking part shows on the meter that is there, and the voltages compare', () => {
    const plate = (fault: string): number =>
      variantsOf(`fault: ${fault}`)[0]!.socket.find(({ electrode }) => electrode === 'plate')!.readings[0]!.volts;
    const sound = plate('none');
    expect(plate('weak tube 60 %')).toBeGreaterThan(1.2 * sound);
    expect(plate('leaky bypass 500 kΩ')).toBeLessThan(0.95 * sound);
    expect(plate('leaky coupling 500 kΩ')).toBeLessThan(0.99 * sound);
    expect(plate('leak drifted +80 %')).toBeGreaterThan(1.02 * sound);
  });

  it('a needle beyond a stated range is at its stop', () => {
    const drooping = socketTable(variantsOf('plate: { load: 10k }', readMeters('1k/V 50 V', '')));
    expect(drooping.find(([name]) => name === 'plate, by 1 kΩ/V, 50 V')![1]).toBe('over 50 V');
  });

  it('leaves the cell of a variant without that point empty', () => {
    const rows = socketTable(variantsOf('variants:\n  r: {}\n  t: { plate.load: transformer }\n'));
    expect(rows.find(([name]) => name === 'behind the coupling capacitor')).toEqual([
      'behind the coupling capacitor',
      '0 V',
      '',
    ]);
  });

  it('stands in the write-up, the result file and what respond prints, with a meter of the builder', async () => {
    const folder = freshFolder();
    const args = ['respond', '--set', 'tuned circuit.loaded Q=40', '--meter', '11M'];
    const { status, out } = await ran([...args, '--out', join(folder, 'paper')]);
    const text = readFileSync(join(folder, 'paper', 'response.md'), 'utf8');
    const result = JSON.parse(readFileSync(join(folder, 'paper', 'result.json'), 'utf8')) as Result;
    rmSync(folder, { recursive: true });
    expect(status).toBe(0);
    for (const printed of [out, text]) {
      expect(printed).toContain('### Socket voltages');
      expect(printed).toMatch(/\| grid, by 11 MΩ \| -\d+ mV \|/);
      expect(printed).toContain('carrier on: true, and as a meter');
    }
    const { socket, rest } = result.variants[0]!;
    const plate = socket.find(({ electrode }) => electrode === 'plate')!;
    expect(plate.volts).toBe(rest.plateVolts);
    expect(plate.readings.map(({ meter }) => meter)).toEqual(['10 MΩ', '20 kΩ/V', '1 kΩ/V', '11 MΩ']);
  });
});
