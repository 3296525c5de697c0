import type { ChokeLoad, Phones, PhonesLoad, TransformerLoad } from './circuit.ts';

/** A typical part of a set, with where its figures come from. */
export interface LoadPart<Load> {
  readonly name: string;
  readonly load: Load;
  /** Rest current it is made for, A; null where it does not matter. */
  readonly ratedAmps: number | null;
  readonly source: string;
}

/**
 * Interstage figures: primary 20 to 60 H in good transformers and 3 to 10 H in cheap ones of the twenties, leakage 0.5
 * to 1 % of it, secondary capacitance 50 to 150 pF.
 */
const TYPICAL = 'typical, from memory';

function transformer(
  name: string,
  ratio: number,
  [henriesWithoutCurrent, amps, henriesAtAmps]: readonly [number, number, number],
  rest: Omit<TransformerLoad, 'kind' | 'ratio' | 'primaryHenries' | 'falling'>,
): LoadPart<TransformerLoad> {
  return {
    name,
    load: {
      kind: 'transformer',
      ratio,
      primaryHenries: henriesWithoutCurrent,
      ...rest,
      falling: { henriesWithoutCurrent, amps, henriesAtAmps },
    },
    ratedAmps: amps,
    source: TYPICAL,
  };
}

/** Interstage transformers, best first: the first stands for any that is not named. */
export const TRANSFORMERS: readonly LoadPart<TransformerLoad>[] = [
  transformer('good 1:3', 3, [50, 4e-3, 35], {
    primaryDcOhms: 1200,
    leakageHenries: 0.25,
    coreLossOhms: 400e3,
    primaryFarads: 40e-12,
    secondaryDcOhms: 8000,
    secondaryFarads: 70e-12,
  }),
  transformer('plain 1:3', 3, [20, 3e-3, 12], {
    primaryDcOhms: 1000,
    leakageHenries: 0.18,
    coreLossOhms: 200e3,
    primaryFarads: 50e-12,
    secondaryDcOhms: 6500,
    secondaryFarads: 110e-12,
  }),
  transformer('early 1:5', 5, [8, 2e-3, 5], {
    primaryDcOhms: 800,
    leakageHenries: 0.08,
    coreLossOhms: 80e3,
    primaryFarads: 60e-12,
    secondaryDcOhms: 9000,
    secondaryFarads: 140e-12,
  }),
];

export const CHOKES: readonly LoadPart<ChokeLoad>[] = [
  {
    name: 'large',
    load: { kind: 'choke', henries: 250, dcOhms: 6000, coreLossOhms: 1e6, selfFarads: 90e-12 },
    ratedAmps: 5e-3,
    source: TYPICAL,
  },
  {
    name: 'small',
    load: { kind: 'choke', henries: 30, dcOhms: 800, coreLossOhms: 250e3, selfFarads: 60e-12 },
    ratedAmps: 20e-3,
    source: TYPICAL,
  },
];

/** A diaphragm's resonance from what is read of it: frequency, the ohms it adds there, and its sharpness. */
export function resonanceParts(
  hertz: number,
  ohms: number,
  q: number,
): Pick<Phones, 'resonanceOhms' | 'resonanceHenries' | 'resonanceFarads'> {
  const omega = 2 * Math.PI * hertz;
  return { resonanceOhms: ohms, resonanceHenries: ohms / (omega * q), resonanceFarads: q / (omega * ohms) };
}

/**
 * Magnetic phones: 2000 ohms is the DC resistance (A. Klase, High impedance headsets for crystal radios,
 * https://headwizememorial.wordpress.com/2018/03/15/high-impedance-headsets-for-crystal-radios/, seen); inductance of 1
 * to 2 H and all else typical, from memory.
 */
export const PHONES: readonly LoadPart<PhonesLoad>[] = [
  {
    name: '2000 ohm',
    load: {
      kind: 'phones',
      dcOhms: 2000,
      henries: 1.5,
      eddyLossOhms: 30e3,
      selfFarads: 200e-12,
      ...resonanceParts(900, 6000, 8),
    },
    ratedAmps: null,
    source: 'DC resistance seen (A. Klase, High impedance headsets for crystal radios); the rest typical, from memory',
  },
  {
    name: '4000 ohm',
    load: {
      kind: 'phones',
      dcOhms: 4000,
      henries: 3,
      eddyLossOhms: 60e3,
      selfFarads: 200e-12,
      ...resonanceParts(900, 12e3, 8),
    },
    ratedAmps: null,
    source: TYPICAL,
  },
];

/** A dynamic earpiece of a few tens of ohms, to be fed through a matching transformer. */
export const LOW_IMPEDANCE_EARPIECE: LoadPart<PhonesLoad> = {
  name: 'low-impedance earpiece',
  load: {
    kind: 'phones',
    dcOhms: 30,
    henries: 0.5e-3,
    eddyLossOhms: null,
    selfFarads: null,
    resonanceOhms: null,
    resonanceHenries: null,
    resonanceFarads: null,
  },
  ratedAmps: null,
  source: TYPICAL,
};
