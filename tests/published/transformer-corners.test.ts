import { describe, expect, it } from 'vitest';
import type { Transformer } from '../../src/engine/circuits/circuit.ts';
import { solveComplex } from '../../src/engine/circuits/dense-solve.ts';
import { stampTransformer } from '../../src/engine/circuits/load-transformer.ts';
import { CATHODE, Network } from '../../src/engine/circuits/network.ts';

/** Volts at the secondary per volt of a generator with a resistance in series, at one frequency. */
function responder(sourceOhms: number, parts: Transformer, loadOhms: number | null): (hertz: number) => number {
  const network = new Network();
  const high = network.node();
  network.resistor(high, CATHODE, sourceOhms);
  const out = stampTransformer(network, high, network.fixed(0), parts, false);
  if (loadOhms !== null) network.resistor(out, CATHODE, loadOhms);
  const { size, conductance, storage } = network.assemble();
  return (hertz) => {
    // the generator as a current into its own resistance
    const volts = new Float64Array(2 * size);
    volts[high] = 1 / sourceOhms;
    solveComplex(
      conductance,
      storage.map((value) => value * 2 * Math.PI * hertz),
      size,
      volts,
    );
    return Math.hypot(volts[out]!, volts[size + out]!);
  };
}

/** The frequency between two others at which the level has fallen to a number of decibels below a reference. */
function crossing(at: (hertz: number) => number, level: number, inside: number, outside: number): number {
  let [above, below] = [inside, outside];
  for (let halving = 0; halving < 60; halving++) {
    const middle = Math.sqrt(above * below);
    if (at(middle) > level) above = middle;
    else below = middle;
  }
  return Math.sqrt(above * below);
}

const decibels = (ratio: number): number => 20 * Math.log10(ratio);
/** Half the power. */
const THREE_DECIBELS_DOWN = Math.SQRT1_2;

/** Nothing but what an example names. */
const BARE: Transformer = {
  ratio: 1,
  primaryHenries: 1e7,
  primaryDcOhms: 0,
  leakageHenries: 0,
  coreLossOhms: null,
  primaryFarads: 0,
  secondaryDcOhms: 0,
  secondaryFarads: 0,
};

/**
 * A worked example of our own: plate resistance 7.7 kΩ, 50 H, 1:3, leakage 0.25 H on the primary side, 120 pF on the
 * secondary. The corner below is that of the plate resistance, in parallel with the load on the primary side, against
 * the primary inductance: f = r·R/(2π·Lp·(n²·r + R)), Transformer notes, http://amwindow.org/tech/htm/trannynotes.htm,
 * seen; unloaded r/(2π·Lp), Transformer questions, http://www.jacmusic.com/techcorner/SBENCH-PAGES/sbench101/TubeMisc/fb_faq3.txt,
 * seen. Above, f0 = 1/(2π·√(LL·n²·C)), the same page, with Q = √(LL/n²C)/r: 9686 Hz and 1.976, 5.92 dB.
 */
describe('a 1:3 transformer behind 7.7 kΩ', () => {
  const parts: Transformer = {
    ...BARE,
    ratio: 3,
    primaryHenries: 50,
    leakageHenries: 0.25,
    secondaryFarads: 120e-12,
  };
  // Worked by hand from those formulas and, with the load, from the low-pass that it damps. 0.5 %: the leakage lies in
  // front of the primary and is that share of it. 0.1 dB: the same again in level, 0.04 dB, and 400 Hz is 0.02 dB low.
  it.each([
    ['unloaded', null, 24.51, 5.91],
    ['with 1 MΩ', 1e6, 22.93, 4.36],
  ] as const)('%s: the corner below, and the resonance over 400 Hz', (_, loadOhms, lowHertz, peak) => {
    const at = responder(7700, parts, loadOhms);
    const middle = at(400);
    const low = crossing(at, middle * THREE_DECIBELS_DOWN, 400, 2);
    expect(Math.abs(low / lowHertz - 1)).toBeLessThan(0.005);
    expect(Math.abs(decibels(at(9686) / middle) - peak)).toBeLessThan(0.1);
  });

  // Without leakage the formulas are exact; 1e-3 is half of their last printed digit and more.
  it.each([
    ['unloaded', null, 24.51, 3],
    ['with 1 MΩ', 1e6, 22.92, (3 * (1e6 / 9)) / (1e6 / 9 + 7700)],
  ] as const)('%s, no leakage: the corner below by the formula', (_, loadOhms, lowHertz, middle) => {
    const at = responder(7700, { ...parts, leakageHenries: 0, secondaryFarads: 0 }, loadOhms);
    const low = crossing(at, middle * THREE_DECIBELS_DOWN, 400, 2);
    expect(Math.abs(low / lowHertz - 1)).toBeLessThan(1e-3);
  });

  it('mid frequencies come through with the ratio, less what leakage and load take', () => {
    // worked by hand: 3·50/50.25, and that times (1 MΩ/9)/(1 MΩ/9 + 7.7 kΩ); 0.3 %: the resonance lifts 400 Hz by 0.17 %
    expect(Math.abs(responder(7700, parts, null)(400) / 2.9851 - 1)).toBeLessThan(0.003);
    expect(Math.abs(responder(7700, parts, 1e6)(400) / 2.7916 - 1)).toBeLessThan(0.003);
  });
});

/**
 * Leakage and capacitance behind a resistance for several Q = Z0/r, f0 10 kHz. The page cited above prints peaks of 6, 3, 1, 0.3 and
 * 0 dB and corners at 1.5, 1.4, 1.25, 1.1 and 1 f0 for the first five, rounded freely; these are the exact low-pass of
 * second order, peak Q/√(1 − 1/4Q²), corner √(b + √(b² + 1)) with b = 1 − 1/2Q².
 */
describe('damped resonance of leakage and winding capacitance', () => {
  it.each([
    [2, 6.3, 6.02, 1.485],
    [1.41, 3.57, 2.98, 1.413],
    [1, 1.25, 0, 1.272],
    [0.8, 0.21, -1.94, 1.115],
    [0.7, 0, -3.1, 0.99],
    [0.6, 0, -4.44, 0.827],
    [0.5, 0, -6.02, 0.644],
  ])('Q %d: peak %d dB, %d dB at f0, 3 dB down at %d f0', (q, peak, atResonance, corner) => {
    const [hertz, ohms] = [10e3, 10e3];
    const omega = 2 * Math.PI * hertz;
    const reactance = q * ohms;
    const at = responder(
      ohms,
      { ...BARE, leakageHenries: reactance / omega, secondaryFarads: 1 / (omega * reactance) },
      null,
    );
    // 100 Hz stands for the flat part: (0.01)² of f0 leaves 1e-4 of it
    const flat = at(100);
    let highest = flat;
    for (let f = 100; f < 20e3; f *= 1.002) highest = Math.max(highest, at(f));
    // 0.1 dB and 1 %: the table's last digits are finer than either, and steps of 0.2 % find a peak within 1e-4 dB
    expect(Math.abs(decibels(highest / flat) - peak)).toBeLessThan(0.1);
    expect(Math.abs(decibels(at(hertz) / flat) - atResonance)).toBeLessThan(0.1);
    const three = crossing(at, flat * THREE_DECIBELS_DOWN, 0.5 * hertz, 4 * hertz);
    expect(Math.abs(three / hertz / corner - 1)).toBeLessThan(0.01);
  });
});
