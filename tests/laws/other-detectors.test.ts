import { describe, expect, it } from 'vitest';
import { averagingCautions } from '../../src/engine/circuits/averaging-cautions.ts';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { magnitude } from '../../src/engine/circuits/complex.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { proveTone, type ToneProof } from '../../src/engine/proof/tone-proof.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { coil, stiff } from './grid-leak-circuit.ts';
import { expectProved, heardAt, OTHER_KINDS, plainCircuit, seededDetectors } from './other-detector-circuits.ts';
import { ToneBench } from './rendered-tone.ts';

const tables = new TableStore();

describe.each(OTHER_KINDS)('%s: renderer against the integration of every carrier cycle', (kind) => {
  it.each(seededDetectors(kind, 1, 4).map((c) => [c.said, c] as const))('%s', (_, c) => expectProved(c, tables));
});

/** A load whose product with the carrier is the given number of cycles. */
function withCycles(circuit: DetectorCircuit, cycles: number, ohms: number): DetectorCircuit {
  const farads = cycles / (circuit.station.carrierHertz * ohms);
  const { detector } = circuit;
  return detector.diode
    ? { ...circuit, detector: { ...detector, diode: { ...detector.diode, loadOhms: ohms, bypassFarads: farads } } }
    : { ...circuit, detector: { ...detector, cathode: { ohms, farads, biasVolts: 0 } } };
}

/**
 * f·R·C below the bounds at which the result says that the ripple is left out: the limits are not promised there. What is
 * missed is marked, so that one mended shows, and bounded by what was measured, with room, so that none gets worse unseen.
 */
describe('where the carrier ripples on what it charges', () => {
  const diode = (volts: number): DetectorCircuit => withCycles(heardAt(plainCircuit('diode'), volts, 530e3), 13, 250e3);
  // a little over one cycle, 0.19 dB off; the carrier's harmonics at the cathode are not carried
  const follower = withCycles(heardAt(plainCircuit('infinite impedance'), 1, 530e3), 1.06, 20e3);

  it.each([
    [400, 0.8],
    [5000, 0.3],
  ])('diode, 250 kΩ, f·R·C 13, 530 kHz, 1 V, %d Hz at depth %d: within the limits all the same', (toneHertz, depth) => {
    expectProved({ said: '', circuit: diode(1), toneHertz, depth }, tables);
  });

  // the diode's fundamental is 0.04 dB off, its second harmonic 1.30 % instead of 1.23 %: 5 % of its value, 3 % is the limit;
  // infinite impedance is 0.19 dB off, 0.1 dB is the limit
  describe.each([
    ['diode, the same at 5 V', diode(5), 0.1, 0.08],
    ['infinite impedance, 20 kΩ, f·R·C 1, 530 kHz, 1 V', follower, 0.3, 0.03],
  ])('%s', (_, circuit, decibels, secondShare) => {
    const rest = restPoint(circuit);
    let kept: ToneProof | undefined;
    const proof = (): ToneProof => {
      kept ??= proveTone(rest, tables.lawsFor(rest, 0.8), 400, 0.8);
      return kept;
    };

    it('within the limits', { fails: true }, () => expect(proof().holds).toBe(true));

    it('no further off, and the result says so', () => {
      expect(averagingCautions(rest).map((caution) => caution.code)).toContain('ripple');
      expect(Math.abs(proof().decibels)).toBeLessThan(decibels);
      const second = proof().reference.secondPercent;
      expect(Math.abs(proof().secondDifferencePercent)).toBeLessThan(secondShare * second);
    });
  });
});

describe('a rendered tone of small modulation follows the linearised response', () => {
  const TONES_HERTZ = [25, 100, 400, 2500, 5000, 10_000];
  const SOURCES = [
    ['stiff source', stiff(40)],
    ['coil', coil(80, 0.4)],
  ] as const;
  const cases = OTHER_KINDS.flatMap((kind) => SOURCES.map(([name, source]) => [kind, name, source] as const));
  it.each(cases)('%s, %s', (kind, _, tunedCircuit) => {
    const bench = new ToneBench({ ...plainCircuit(kind), tunedCircuit }, 0.02);
    const response = new LinearResponse(bench.rest);
    for (const hertz of TONES_HERTZ) {
      // 0.15 s: 15 time constants of the coupling capacitor, 7 of a cathode's 20 ms
      const rendered = bench.harmonicVolts(hertz, 0.02, 0.16)[1]!;
      const decibels = 20 * Math.log10(rendered / (0.02 * magnitude(response.at(hertz).output)));
      // the program's own stated limit
      expect(Math.abs(decibels), `${hertz} Hz`).toBeLessThan(0.05);
    }
    expect(bench.renderer.counts.unsettled).toBe(0);
  });
});
