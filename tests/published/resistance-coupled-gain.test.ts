import { describe, expect, it } from 'vitest';
import { triodePoint } from '../../src/engine/tubes/laws.ts';
import { SOCKET_STRAYS, tubeFromCatalogue } from '../../src/engine/tubes/socketed-tube.ts';

// Resistance-coupled amplifier charts, RCA Receiving Tube Manual, RC-13 to RC-30 (from memory); 300 V supply.
// Tube, plate resistor MΩ, next grid resistor MΩ, cathode resistor Ω (bypassed), printed gain.
const CHART: readonly [string, number, number, number, number][] = [
  ['6SN7-GT', 0.05, 0.05, 1020, 13],
  ['6SN7-GT', 0.05, 0.1, 1270, 14],
  ['6SN7-GT', 0.05, 0.25, 1500, 14],
  ['6SN7-GT', 0.1, 0.1, 1900, 14],
  ['6SN7-GT', 0.1, 0.25, 2440, 14],
  ['6SN7-GT', 0.1, 0.5, 2700, 14],
  ['12AX7', 0.1, 0.1, 1300, 45],
  ['12AX7', 0.1, 0.22, 1500, 52],
  ['12AX7', 0.1, 0.47, 1700, 57],
  ['12AX7', 0.22, 0.22, 2200, 59],
  ['12AX7', 0.22, 0.47, 2800, 65],
  ['12AX7', 0.22, 1, 3100, 68],
  ['12AX7', 0.47, 0.47, 4300, 69],
  ['12AX7', 0.47, 1, 5200, 73],
  ['12AX7', 0.47, 2.2, 5900, 75],
  ['6SL7-GT', 0.1, 0.1, 1500, 34],
  ['6SL7-GT', 0.1, 0.22, 1800, 38],
  ['6SL7-GT', 0.1, 0.47, 2100, 41],
  ['6SL7-GT', 0.22, 0.22, 2600, 42],
  ['6SL7-GT', 0.22, 0.47, 3200, 46],
  ['6SL7-GT', 0.22, 1, 3700, 48],
];

// 10 %: the chart's last digit and its tubes. 25 % for the 6SN7-GT: its mu is printed 20 at 9 mA and falls at the 2 to 4 mA of
// these stages, which one mu cannot follow, so the law gives up to 23 % too much gain.
const TOLERANCE: Readonly<Record<string, number>> = { '6SN7-GT': 0.25, '12AX7': 0.1, '6SL7-GT': 0.1 };

/** Gain of the self-biased stage: rest point by halving (the current falls as it biases itself), then g_m into the load. */
function gain(name: string, plateOhms: number, nextOhms: number, cathodeOhms: number): number {
  const { law } = tubeFromCatalogue(name, { supplyVolts: 300, strays: SOCKET_STRAYS }).tube;
  const at = (amps: number) => triodePoint(law, -amps * cathodeOhms, 300 - amps * (plateOhms + cathodeOhms));
  let low = 0;
  let high = 300 / (plateOhms + cathodeOhms);
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (at(middle).plateAmps > middle) low = middle;
    else high = middle;
  }
  const rest = at(low);
  return rest.siemens / (rest.plateSiemens + 1 / plateOhms + 1 / nextOhms);
}

describe('resistance-coupled gain, RCA chart rows', () => {
  it.each(CHART)('%s, %d MΩ into %d MΩ, %d Ω: gain %d', (name, plate, next, cathode, printed) => {
    expect(Math.abs(gain(name, plate * 1e6, next * 1e6, cathode) / printed - 1)).toBeLessThan(TOLERANCE[name]!);
  });
});
