import { nodesFor } from '../tubes/cycle-average.ts';
import type { Caution } from './cautions.ts';
import { magnitude } from './complex.ts';
import { chargedPair } from './detector-network.ts';
import { impedanceAt } from './plate-network.ts';
import type { RestPoint } from './rest-point.ts';
import { smoothLaws } from './stage-laws.ts';

/** Share of U1 above which the plate's second carrier harmonic is no longer negligible. */
const MOST_HARMONIC = 0.05;
/**
 * The same with hardly any bypass at more than a weak signal. There shares of 0.01 to 0.045 were met, against the
 * integration of every cycle, at which a second audio harmonic of a few per cent is missed by a tenth and more, while
 * the fundamental stays within its limit: the promise of `little-bypass` for harmonics does not reach so far.
 */
const MOST_HARMONIC_ON_BARE_PLATE = 0.01;
/** Carrier over highest audio below which averaging is doubtful; the response table ends at 16 kHz. */
const LEAST_CARRIER_HERTZ = 10 * 16_000;
/** Bypass with strays and level inside which the renderer's tight error limit holds. */
const TIGHT_BYPASS_FARADS = 50e-12;
const TIGHT_LEVEL_VOLTS = 0.1;

/** Where averaging over the carrier's cycles leaves something out, and where a textbook law does. */
export function averagingCautions(rest: RestPoint): Caution[] {
  const { circuit } = rest;
  const found: Caution[] = [];
  const raise = (when: boolean, code: Caution['code'], figure: number, limit: number): void => {
    if (when) found.push({ code, figure, limit });
  };
  raise(circuit.detector.law !== 'tube', 'textbook', 0, 0);
  const hertz = circuit.station.carrierHertz;
  raise(hertz < LEAST_CARRIER_HERTZ, 'slow-carrier', hertz, LEAST_CARRIER_HERTZ);
  const { ohms, farads, leastCycles } = chargedPair(circuit);
  const cycles = hertz * ohms * farads;
  if (leastCycles !== null) raise(cycles < leastCycles, 'ripple', cycles, leastCycles);
  if (circuit.detector.kind !== 'grid leak' && circuit.detector.kind !== 'plate bend') return found;
  const harmonic = plateHarmonicShare(rest);
  const bypass = circuit.plate.bypassFarads + circuit.tube.plateCathodeFarads;
  const bare = bypass < TIGHT_BYPASS_FARADS && circuit.station.levelVoltsRms > TIGHT_LEVEL_VOLTS;
  // the strongest of the three that applies: each says how far the figures may be off
  if (harmonic > MOST_HARMONIC) raise(true, 'plate-harmonic', harmonic, MOST_HARMONIC);
  else if (bare && harmonic > MOST_HARMONIC_ON_BARE_PLATE) {
    raise(true, 'bare-plate', harmonic, MOST_HARMONIC_ON_BARE_PLATE);
  } else raise(bare, 'little-bypass', bypass, TIGHT_BYPASS_FARADS);
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
