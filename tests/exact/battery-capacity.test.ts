import { describe, expect, it } from 'vitest';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { readBatteryCapacity } from '../../src/list/battery-capacity.ts';
import { listVariants } from '../../src/list/variants.ts';

describe('the capacity of a B battery', () => {
  it.each([
    ['500 mAh', 0.5],
    ['500mAh', 0.5],
    ['1.2 Ah', 1.2],
    ['1.2 A·h', 1.2],
    ['2 A h', 2],
    ['none', null],
  ])('%s', (written, value) => {
    expect(readBatteryCapacity(written)).toEqual({ value });
  });

  it.each(['500', '500 mA', 'h', 'Ah', 'big Ah', '500 mVh', ''])('%j is refused', (written) => {
    expect(readBatteryCapacity(written)).toMatchObject({
      fault: { code: 'not-a-capacity', got: written || 'nothing' },
    });
  });

  it('of a kiloampere-hour or a microampere-hour is refused with the range', () => {
    for (const written of ['5000 Ah', '1 µAh']) {
      expect(readBatteryCapacity(written)).toMatchObject({
        fault: { code: 'out-of-range', expected: '1 mAh to 1000 Ah' },
      });
    }
  });
});

describe('an output into nothing', () => {
  it('comes to rest, and is heard at the plate itself', () => {
    const { circuit } = listVariants('output: { into: nothing }', 'set.yaml')[0]!;
    const rest = restPoint(circuit);
    expect(rest.audio.output.index).toBe(rest.audio.plateNode);
    expect(rest.plateVolts).toBeGreaterThan(10);
  });

  it('with a load resistance is behind its coupling capacitor again', () => {
    const { output } = listVariants('output: { into: nothing, load resistance: 1M }', 'set.yaml')[0]!.circuit;
    expect(output).toMatchObject({ couplingFarads: 10e-9, loadOhms: 1e6 });
  });
});
