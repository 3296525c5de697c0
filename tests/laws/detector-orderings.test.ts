import { describe, expect, it } from 'vitest';
import type { DetectorCircuit, DetectorKind } from '../../src/engine/circuits/circuit.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { steadyTone } from '../../src/engine/circuits/steady-state.ts';
import { SOCKET_STRAYS, tubeFromCatalogue } from '../../src/engine/tubes/socketed-tube.ts';
import { heardAt, OTHER_KINDS, plainCircuit } from './other-detector-circuits.ts';

// Rules of the trade: common practice, no source. Only orders are checked, so there is no tolerance, unless one stands.

const KINDS: readonly DetectorKind[] = ['grid leak', ...OTHER_KINDS];
const TUBES = ['6SN7-GT', '6SL7-GT', '76'] as const;

/** One of the five with the same tube and station, a stiff source, 180 V, and parts that a builder would choose. */
function detector(kind: DetectorKind, type: string, levelVoltsRms: number): DetectorCircuit {
  const plain = heardAt(plainCircuit(kind), levelVoltsRms);
  const { tube } = tubeFromCatalogue(type, { supplyVolts: plain.plate.supplyVolts, strays: SOCKET_STRAYS });
  const { diode } = plain.detector;
  // a load light enough on the next grid's 1 MΩ for the negative peaks of 80 %
  if (kind === 'diode' && diode) {
    return {
      ...plain,
      tube,
      detector: { ...plain.detector, diode: { ...diode, loadOhms: 220e3, bypassFarads: 250e-12 } },
    };
  }
  if (kind !== 'infinite impedance') return { ...plain, tube };
  const cathode = { ohms: 100e3, farads: 250e-12, biasVolts: 0 };
  return { ...plain, tube, detector: { ...plain.detector, cathode } };
}

/** Volts at 400 Hz and the second harmonic's share of them. */
function tone(circuit: DetectorCircuit, hertz = 400): { volts: number; second: number } {
  const { output } = steadyTone(restPoint(circuit), hertz, 0.8);
  return { volts: output[1]!, second: output[2]! / output[1]! };
}

describe.each(TUBES)('five detectors, %s, modulated by 80 %', (type) => {
  it('20 mV: the grid leak gives most audio, four times the next', () => {
    const volts = KINDS.map((kind) => tone(detector(kind, type, 0.02)).volts);
    // measured: 26, 52 and 18 mV rms against 4, 11 and 1.4 of plate bend, 1.6 of the diode, less of the others
    for (const other of volts.slice(1)) expect(volts[0]! / other).toBeGreaterThan(4);
  });

  it('2 V: diode and infinite impedance distort less than grid leak and plate bend', () => {
    // measured: diode 2.3 %, infinite impedance 2.3, 1.9, 3.5 %, crystal 0.6 %; plate bend 3.9, 28, 5.8 %, grid leak 23, 38, 16 %
    const second = (kind: DetectorKind): number => tone(detector(kind, type, 2)).second;
    const worse = Math.min(second('grid leak'), second('plate bend'));
    for (const kind of ['infinite impedance', 'diode', 'crystal'] as const) expect(second(kind)).toBeLessThan(worse);
  });
});

describe('infinite impedance against a diode, both into as much again for audio alone, 2 V at 80 %', () => {
  /** Load and what follows the coupling capacitor are alike: R_ac/R_dc is a half, so that a diode clips from 50 %. */
  function loaded(kind: 'infinite impedance' | 'diode', type: string, ohms: number): DetectorCircuit {
    const circuit = detector(kind, type, 2);
    const { diode } = circuit.detector;
    const farads = 120e-12;
    return {
      ...circuit,
      detector: diode
        ? { ...circuit.detector, diode: { ...diode, loadOhms: ohms, bypassFarads: farads } }
        : { ...circuit.detector, cathode: { ohms, farads, biasVolts: 0 } },
      output: { couplingFarads: 0.1e-6, loadOhms: ohms, loadFarads: 0 },
    };
  }

  // measured at 400 Hz: 11.7 and 11.4 % behind the diode; 2.3, 1.9, 2.6, 2.5 and 2.3 % behind the tubes, in this order
  it.each([
    ['6SN7-GT', 100e3],
    ['6SN7-GT', 250e3],
    ['6SL7-GT', 100e3],
    ['6SL7-GT', 250e3],
    ['76', 250e3],
  ])('%s, %d Ω: less than a quarter of the diode’s second harmonic', (type, ohms) => {
    for (const hertz of [400, 1000]) {
      const [tube, diode] = [
        tone(loaded('infinite impedance', type, ohms), hertz),
        tone(loaded('diode', type, ohms), hertz),
      ];
      expect(tube.second / diode.second, `${hertz} Hz`).toBeLessThan(0.25);
    }
  });

  // a tube of low transconductance does not follow into 50 kΩ so well: 3.4 % against 11.7 %
  it('76, 100 kΩ: less than a third', () => {
    const share = tone(loaded('infinite impedance', '76', 100e3)).second / tone(loaded('diode', '76', 100e3)).second;
    expect(share).toBeLessThan(1 / 3);
  });
});
