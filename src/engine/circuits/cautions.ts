import { nodesFor } from '../tubes/cycle-average.ts';
import { magnitude } from './complex.ts';
import { leakOhmsAtAudio } from './grid-leak.ts';
import { impedanceAt } from './plate-network.ts';
import type { RestPoint } from './rest-point.ts';
import { smoothLaws } from './stage-laws.ts';

/** A tube's published limits; null where the sheet prints none. */
export interface Ratings {
  readonly plateVolts: number | null;
  readonly plateWatts: number | null;
}

/** Something the builder should know: a code for the sentence, the figure that raised it and the limit it passed. */
export interface Caution {
  readonly code:
    | 'shock'
    | 'plate-volts'
    | 'plate-watts'
    | 'ripple'
    | 'plate-harmonic'
    | 'little-bypass'
    | 'slow-carrier'
    | 'outside-rows'
    | 'bypass-inaudible'
    | 'textbook'
    | 'limited';
  readonly figure: number;
  readonly limit: number;
}

/** Supply from which the shock caution shows, V. Common practice, no source: B batteries of 45 V and more sting. */
const SHOCK_VOLTS = 45;
/** Below this product of carrier, leak and capacitor the carrier's ripple on the grid bends the average. */
const LEAST_CYCLES = 20;
/** Share of U1 above which the plate's second carrier harmonic is no longer negligible. */
const MOST_HARMONIC = 0.05;
/** Carrier over highest audio below which averaging is doubtful; the response table ends at 16 kHz. */
const LEAST_CARRIER_HERTZ = 10 * 16_000;
/** Bypass with strays and level inside which the renderer's tight error limit holds. */
const TIGHT_BYPASS_FARADS = 50e-12;
const TIGHT_LEVEL_VOLTS = 0.1;

/** Cautions that follow from the rest point alone. */
export function restCautions(rest: RestPoint, ratings: Ratings | null): Caution[] {
  const { circuit } = rest;
  const found: Caution[] = [];
  const raise = (when: boolean, code: Caution['code'], figure: number, limit: number): void => {
    if (when) found.push({ code, figure, limit });
  };
  const supply = circuit.plate.supplyVolts;
  raise(supply >= SHOCK_VOLTS, 'shock', supply, SHOCK_VOLTS);
  if (ratings?.plateVolts)
    raise(rest.plateVolts > ratings.plateVolts, 'plate-volts', rest.plateVolts, ratings.plateVolts);
  const watts = rest.plateVolts * rest.currents.plateAmps;
  if (ratings?.plateWatts) raise(watts > ratings.plateWatts, 'plate-watts', watts, ratings.plateWatts);
  raise(circuit.detector.law !== 'tube', 'textbook', 0, 0);
  const hertz = circuit.station.carrierHertz;
  raise(hertz < LEAST_CARRIER_HERTZ, 'slow-carrier', hertz, LEAST_CARRIER_HERTZ);
  const cycles = hertz * leakOhmsAtAudio(circuit) * circuit.detector.gridCapacitorFarads;
  raise(cycles < LEAST_CYCLES, 'ripple', cycles, LEAST_CYCLES);
  const harmonic = plateHarmonicShare(rest);
  raise(harmonic > MOST_HARMONIC, 'plate-harmonic', harmonic, MOST_HARMONIC);
  const bypass = circuit.plate.bypassFarads + circuit.tube.plateCathodeFarads;
  const level = circuit.station.levelVoltsRms;
  raise(bypass < TIGHT_BYPASS_FARADS && level > TIGHT_LEVEL_VOLTS, 'little-bypass', bypass, TIGHT_BYPASS_FARADS);
  return found;
}

/**
 * The plate's second carrier harmonic over mu, as a share of the carrier of U1, at the crest of full modulation:
 * what the averaged equations leave out.
 */
export function plateHarmonicShare(rest: RestPoint): number {
  const { circuit, currents, audio } = rest;
  if (circuit.detector.law !== 'tube') return 0;
  const peak = currents.tubeCarrierPeak * (1 + Math.min(circuit.station.modulation, 1));
  if (!(peak > 0)) return 0;
  const { cathode } = smoothLaws(circuit.tube.law);
  const { mu, phi } = circuit.tube.law;
  const u = rest.gridVolts + rest.plateVolts / mu + phi;
  const nodes = nodesFor(peak, cathode.scaleVolts);
  const out = new Float64Array(4);
  let second = 0;
  for (let k = 0; k < nodes; k++) {
    const cos = Math.cos(((2 * k + 1) * Math.PI) / (2 * nodes));
    cathode.evaluate(u + peak * cos, out);
    second += ((out[0] as number) * (2 * cos * cos - 1) * 2) / nodes;
  }
  const ohms = magnitude(impedanceAt(audio.system, audio.plateNode, 2 * circuit.station.carrierHertz));
  return (Math.abs(second) * ohms) / mu / peak;
}
