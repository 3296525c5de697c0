import { preferredAbove } from '../parts/preferred-values.ts';
import type { Caution, Ratings } from './cautions.ts';
import { complex, magnitude, minus, over, plus, times } from './complex.ts';
import { solveComplex } from './dense-solve.ts';
import { leakOhmsAtAudio } from './grid-leak.ts';
import { plateAdmittance } from './plate-network.ts';
import { LinearResponse } from './response.ts';
import type { RestPoint } from './rest-point.ts';

/** A grid capacitor of less than this times what it feeds divides the carrier down. Common practice, no source. */
const CAPACITOR_TIMES_INPUT = 10;
/** Audio up to which the programme's full depth is to be followed, Hz: its strongest peaks. Common practice, no source. */
const DEEP_AUDIO_HERTZ = 1000;
/** Carrier that the grid of the next stage does not mind, V rms: it begins to detect. Common practice, no source. */
const CARRIER_ON_NEXT_GRID_VOLTS = 0.5;

/** What the station's signal meets in the circuit. */
export function signalCautions(rest: RestPoint, ratings: Ratings | null): Caution[] {
  const found: Caution[] = [];
  const { gridCapacitorFarads } = rest.circuit.detector;
  const wanted = CAPACITOR_TIMES_INPUT * gridFarads(rest);
  if (gridCapacitorFarads < wanted) {
    const further = -20 * Math.log10(magnitude(rest.phasors.grid));
    found.push({ code: 'small-grid-capacitor', figure: gridCapacitorFarads, limit: wanted, further });
  }
  const followed = followedHertz(rest);
  if (followed !== null && followed < DEEP_AUDIO_HERTZ) {
    found.push({ code: 'slope-limit', figure: followed, limit: DEEP_AUDIO_HERTZ, further: followedDepth(rest) });
  }
  if (ratings?.feedsGrid) {
    const volts = carrierAtOutputVoltsRms(rest);
    const limit = CARRIER_ON_NEXT_GRID_VOLTS;
    if (volts > limit) {
      const further = preferredAbove(bypassFor(rest, volts / limit), 'E12');
      found.push({ code: 'carrier-on-plate', figure: volts, limit, further });
    }
  }
  return found;
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
 * Swing of the mean grid current per unit of modulation at one audio frequency, over the mean itself. The grid lets go of
 * its charge through the leak alone: once the swing times the depth passes 1, the current would have to turn round, and
 * the grid cuts across the trough of the modulation instead. For a strong carrier this is the rule
 * R·C ≤ √(1 − m²)/(m·ω) (F. E. Terman, Radio Engineers' Handbook, 1943, section 7, from memory); a weak one, whose grid
 * conducts throughout, never comes near.
 */
export function gridCurrentSwing(rest: RestPoint, response: LinearResponse, hertz: number): number {
  const { detector, tube } = rest.circuit;
  const omega = 2 * Math.PI * hertz;
  const { grid, plate } = response.at(hertz);
  const own = complex(
    1 / leakOhmsAtAudio(rest.circuit),
    omega * (detector.gridCapacitorFarads + tube.gridCathodeFarads),
  );
  const toPlate = times(complex(0, omega * tube.gridPlateFarads), minus(grid, plate));
  return magnitude(plus(times(own, grid), toPlate)) / rest.currents.gridAmps;
}

/** Audio up to which the stated modulation is followed, 50 Hz to 10 kHz; null: all of it, or no grid current to judge. */
export function followedHertz(rest: RestPoint): number | null {
  const depth = Math.min(rest.circuit.station.modulation, 1);
  if (!(rest.currents.gridAmps > 0) || !(depth > 0)) return null;
  const response = new LinearResponse(rest);
  const passed = (hertz: number): boolean => depth * gridCurrentSwing(rest, response, hertz) > 1;
  let inside = 50;
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

/** Largest depth that is followed at 1 kHz. */
function followedDepth(rest: RestPoint): number {
  return 1 / gridCurrentSwing(rest, new LinearResponse(rest), DEEP_AUDIO_HERTZ);
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
