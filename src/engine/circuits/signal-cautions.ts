import { preferredAbove } from '../parts/preferred-values.ts';
import type { Caution, Ratings } from './cautions.ts';
import { complex, magnitude, minus, over, plus, times } from './complex.ts';
import { solveComplex } from './dense-solve.ts';
import { leakOhmsAtAudio } from './grid-leak.ts';
import { impedanceAt, plateAdmittance } from './plate-network.ts';
import { LinearResponse } from './response.ts';
import type { RestPoint } from './rest-point.ts';

/** A grid capacitor of less than this times what it feeds divides the carrier down. Common practice, no source. */
const CAPACITOR_TIMES_INPUT = 10;
/** Audio up to which the programme's full depth is to be followed, Hz: its strongest peaks. Common practice, no source. */
const DEEP_AUDIO_HERTZ = 1000;
/** Lowest audio that is judged, Hz: above the corners of usual coupling capacitors. */
const LOWEST_AUDIO_HERTZ = 50;
/** Audio at which coupling capacitors are shorts and bypasses are open, Hz: the usual test tone. */
const MIDDLE_AUDIO_HERTZ = 400;
/** Carrier that the grid of the next stage does not mind, V rms: it begins to detect. Common practice, no source. */
const CARRIER_ON_NEXT_GRID_VOLTS = 0.5;

/** What the station's signal meets in the circuit. */
export function signalCautions(rest: RestPoint, ratings: Ratings | null): Caution[] {
  const { kind } = rest.circuit.detector;
  return [
    ...(kind === 'grid leak' ? gridCapacitorCaution(rest) : []),
    ...depthCautions(rest),
    ...(ratings?.feedsGrid && (kind === 'grid leak' || kind === 'plate bend') ? carrierCaution(rest) : []),
  ];
}

function gridCapacitorCaution(rest: RestPoint): Caution[] {
  const { gridCapacitorFarads } = rest.circuit.detector;
  const wanted = CAPACITOR_TIMES_INPUT * gridFarads(rest);
  if (gridCapacitorFarads >= wanted) return [];
  const further = -20 * Math.log10(magnitude(rest.phasors.grid));
  return [{ code: 'small-grid-capacitor', figure: gridCapacitorFarads, limit: wanted, further }];
}

/** Whether the stated depth is followed: at any audio by a diode with what it feeds, and up to the strong peaks. */
function depthCautions(rest: RestPoint): Caution[] {
  const { station, detector } = rest.circuit;
  const followed = followedHertz(rest);
  if (followed === null || followed >= DEEP_AUDIO_HERTZ) return [];
  const most = followedDepth(rest, MIDDLE_AUDIO_HERTZ);
  if (detector.diode && followed === LOWEST_AUDIO_HERTZ && most !== null) {
    return [{ code: 'peak-clipping', figure: most, limit: Math.min(station.modulation, 1) }];
  }
  const further = followedDepth(rest, DEEP_AUDIO_HERTZ) ?? 0;
  return [{ code: 'slope-limit', figure: followed, limit: DEEP_AUDIO_HERTZ, further }];
}

function carrierCaution(rest: RestPoint): Caution[] {
  const volts = carrierAtOutputVoltsRms(rest);
  const limit = CARRIER_ON_NEXT_GRID_VOLTS;
  if (volts <= limit) return [];
  const further = preferredAbove(bypassFor(rest, volts / limit), 'E12');
  return [{ code: 'carrier-on-plate', figure: volts, limit, further }];
}

/** Capacitance from the grid to all else at the carrier, the plate's part multiplied as it is there, F. */
export function gridFarads(rest: RestPoint): number {
  const { detector, station } = rest.circuit;
  const omega = 2 * Math.PI * station.carrierHertz;
  const across = detector.leakPosition === 'across capacitor' ? 1 / detector.leakOhms : 0;
  const leakage = detector.capacitorLeakageOhms === null ? 0 : 1 / detector.capacitorLeakageOhms;
  const series = complex(across + leakage, omega * detector.gridCapacitorFarads);
  const ratio = rest.phasors.grid;
  return times(series, over(minus(complex(1), ratio), ratio)).im / omega;
}

/**
 * Swing of the mean current that charges the detector, of its grid or diode, per unit of modulation at one audio
 * frequency, over the mean itself; null where no such current flows. The capacitor lets go of its charge through the
 * resistance alone: once the swing times the depth passes 1, the current would have to turn round, and the detector cuts
 * across the trough of the modulation instead. For a strong carrier this is the rule R·C ≤ √(1 − m²)/(m·ω), and at middle
 * audio m ≤ R_ac/R_dc of a diode's load (F. E. Terman, Radio Engineers' Handbook, 1943, section 7, from memory); a weak
 * carrier, with which a grid conducts throughout, never comes near.
 */
export function chargingSwing(rest: RestPoint, response: LinearResponse, hertz: number): number | null {
  const { circuit, currents, audio } = rest;
  if (circuit.detector.cathode || !(currents.gridAmps > 0)) return null;
  const { detector, tube } = circuit;
  const { grid, plate } = response.at(hertz);
  if (detector.diode)
    return magnitude(grid) / magnitude(impedanceAt(audio.system, audio.gridNode, hertz)) / currents.gridAmps;
  const omega = 2 * Math.PI * hertz;
  const own = complex(1 / leakOhmsAtAudio(circuit), omega * (detector.gridCapacitorFarads + tube.gridCathodeFarads));
  const toPlate = times(complex(0, omega * tube.gridPlateFarads), minus(grid, plate));
  return magnitude(plus(times(own, grid), toPlate)) / currents.gridAmps;
}

/** Audio up to which the stated modulation is followed, 50 Hz to 10 kHz; null: all of it, or no grid current to judge. */
export function followedHertz(rest: RestPoint): number | null {
  const depth = Math.min(rest.circuit.station.modulation, 1);
  const response = new LinearResponse(rest);
  const passed = (hertz: number): boolean => depth * (chargingSwing(rest, response, hertz) ?? 0) > 1;
  let inside = LOWEST_AUDIO_HERTZ;
  if (passed(inside)) return inside;
  for (let hertz = inside * 2 ** (1 / 3); hertz <= 10_000; hertz *= 2 ** (1 / 3)) {
    if (passed(hertz)) {
      let outside = hertz;
      // to a thousandth: the rule itself is no better
      while (outside / inside > 1.001) {
        const middle = Math.sqrt(inside * outside);
        if (passed(middle)) outside = middle;
        else inside = middle;
      }
      return inside;
    }
    inside = hertz;
  }
  return null;
}

/** Largest depth that is followed at one audio frequency; null where there is nothing to judge. */
export function followedDepth(rest: RestPoint, hertz: number): number | null {
  const swing = chargingSwing(rest, new LinearResponse(rest), hertz);
  return swing === null || !(swing > 0) ? null : 1 / swing;
}

/** Bypass that would bring the carrier on the plate down by a ratio, F: the tube's current into its admittance. */
function bypassFor(rest: RestPoint, ratio: number): number {
  const { circuit, currents } = rest;
  const omega = 2 * Math.PI * circuit.station.carrierHertz;
  const side = plateAdmittance(circuit, circuit.station.carrierHertz);
  const conductance = side.re + currents.tubeChord / circuit.tube.law.mu;
  const wanted = ratio * magnitude(complex(conductance, side.im));
  const susceptance = Math.sqrt(Math.max(wanted * wanted - conductance * conductance, 0));
  return circuit.plate.bypassFarads + (susceptance - side.im) / omega;
}

/** Carrier that reaches the output, V rms: what is on the plate through the coupling and onto what follows. */
export function carrierAtOutputVoltsRms(rest: RestPoint): number {
  const { system, plateNode, gridNode, output } = rest.audio;
  const n = system.size;
  const re = system.conductance.slice();
  const im = system.storage.map((farads) => farads * 2 * Math.PI * rest.circuit.station.carrierHertz);
  // plate and grid held, one volt and none: their node equations are replaced
  for (const held of [plateNode, gridNode]) {
    for (let c = 0; c < n; c++) {
      re[held * n + c] = c === held ? 1 : 0;
      im[held * n + c] = 0;
    }
  }
  const x = new Float64Array(2 * n);
  x[plateNode] = 1;
  solveComplex(re, im, n, x);
  const share = Math.abs(output.weight) * Math.hypot(x[output.index] as number, x[n + output.index] as number);
  return (share * rest.tuned.carrierPeakVolts * magnitude(rest.phasors.plate)) / Math.SQRT2;
}
