import { overDecades, seededNumbers } from './seeded-numbers.ts';
import { COIL, MIDDLE, type ToneCase } from './tone-pair.ts';

/** Two battery tubes, an early heater tube, a low and a high amplification factor; where a leak returns, V. */
export const FIVE_TUBES = [
  ['01-A', 5],
  ['30', 2],
  ['27', 0],
  ['6SN7-GT', 0],
  ['12AX7', 0],
] as const;

/**
 * Circuits anywhere in the range the renderer is built for: 530 kHz to 1.6 MHz, 5 mV to 5 V rms, leak 220 kΩ to 5 MΩ,
 * grid capacitor 50 to 500 pF, bypass 0 to 2 nF, supply 22 to 250 V; tones from 50 Hz to 10 kHz.
 */
export function seededCases(seed: number, count: number, source: 'stiff' | 'coil'): ToneCase[] {
  const next = seededNumbers(seed);
  const pick = <T>(values: readonly T[]): T => values[Math.floor(next() * values.length)] as T;
  const between = (least: number, most: number): number => overDecades(next(), least, most);
  return Array.from({ length: count }, () => {
    const [tube, filamentVolts] = pick(FIVE_TUBES);
    return {
      ...MIDDLE,
      tube,
      supplyVolts: between(22, 250),
      plateOhms: between(10e3, 220e3),
      bypassFarads: pick([0, between(10e-12, 2e-9), between(50e-12, 2e-9)]),
      gridCapacitorFarads: between(50e-12, 500e-12),
      leakOhms: between(220e3, 5e6),
      leakPosition: pick(['to cathode', 'across capacitor'] as const),
      leakReturnVolts: pick([0, filamentVolts]),
      capacitorLeakageOhms: pick([null, null, null, between(1e6, 50e6)]),
      carrierHertz: between(530e3, 1.6e6),
      levelVoltsRms: between(5e-3, 5),
      tunedCircuit:
        source === 'coil'
          ? { ...COIL, tap: pick([0.3, 0.5, 1]) }
          : { kind: 'stiff', loadedQ: between(10, 100), detuneHertz: pick([0, 0, 0, 2000, -5000]) },
      toneHertz: pick([50, 100, 400, 1000, 2000, 5000, 8000, 10000]),
      depth: pick([0.3, 0.8, 1]),
    };
  });
}

/** A case in one line, as a builder would say it. */
export function said(c: ToneCase): string {
  const tuned = c.tunedCircuit;
  const source = tuned.kind === 'coil' ? `coil, tap ${tuned.tap}` : `Q ${tuned.loadedQ.toFixed(0)}`;
  const off = tuned.detuneHertz === 0 ? '' : `, ${tuned.detuneHertz} Hz off`;
  return [
    `${c.tube} at ${c.supplyVolts.toFixed(0)} V and ${(c.plateOhms / 1e3).toFixed(0)} kΩ`,
    `bypass ${(c.bypassFarads * 1e12).toFixed(0)} pF`,
    `${(c.gridCapacitorFarads * 1e12).toFixed(0)} pF with ${(c.leakOhms / 1e6).toFixed(2)} MΩ ${c.leakPosition}`,
    `${(c.carrierHertz / 1e3).toFixed(0)} kHz, ${c.levelVoltsRms.toPrecision(3)} V rms, ${source}${off}`,
    `${c.toneHertz} Hz at ${c.depth * 100} %`,
  ].join('; ');
}
