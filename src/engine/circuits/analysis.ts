import { InputError } from '../errors.ts';
import { THIRD_OCTAVE_NOMINAL_HERTZ } from '../parts/third-octaves.ts';
import { type Caution, type Ratings, restCautions } from './cautions.ts';
import type { DetectorCircuit } from './circuit.ts';
import { magnitude } from './complex.ts';
import { type CostPart, costByPart } from './cost-by-part.ts';
import { chargedPair } from './detector-network.ts';
import { directCurrents } from './direct-currents.ts';
import { COMMON_METERS, type Meter, type SocketRow, socketRows } from './meter-readings.ts';
import { amplifierGain, corners, LinearResponse, REFERENCE_HERTZ, ratioDecibels } from './response.ts';
import { type RestPoint, restPoint } from './rest-point.ts';
import { type SteadyTone, SURVEYED, steadyTone } from './steady-state.ts';

/** Modulation at which audio volts are quoted: 30 %, the usual test depth. */
export const TEST_MODULATION = 0.3;
const DISTORTION_TONES = [
  [400, 0.3],
  [400, 0.8],
  [1000, 0.3],
  [1000, 0.8],
] as const;
/** Station levels of the sensitivity curve, V rms. */
const SENSITIVITY_LEVELS = [0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5] as const;

/** Figures of the rest point; units in the names, slopes of the averaged laws with the carrier's peaks held. */
export interface RestFigures {
  readonly gridVolts: number;
  readonly gridAmps: number;
  readonly gridResistanceOhms: number;
  readonly plateVolts: number;
  readonly plateAmps: number;
  readonly amplificationFactor: number;
  readonly plateResistanceOhms: number;
  readonly transconductanceSiemens: number;
  readonly stageGain: number;
  readonly plateWatts: number;
  readonly loadWatts: number;
  readonly supplyAmps: number;
  readonly inputCapacitanceFaradsAtAudio: number;
  readonly inputCapacitanceFaradsAtCarrier: number;
  readonly inputResistanceOhms: number;
  readonly carrierAtGridVoltsRms: number;
  readonly carrierOnPlateVoltsRms: number;
  readonly leakCornerHertz: number;
  readonly gridCornerHertz: number;
}

export interface ResponsePoint {
  readonly hertz: number;
  readonly decibels: number;
  readonly phaseDegrees: number;
  readonly voltsRmsAt30Percent: number;
  readonly cost: Readonly<Record<CostPart, number>>;
}

export interface DistortionFigure {
  readonly hertz: number;
  readonly modulationPercent: number;
  readonly secondPercent: number;
  readonly thirdPercent: number;
  readonly totalPercent: number;
}

export interface SensitivityFigure {
  readonly levelVoltsRms: number;
  readonly audioVoltsRmsAt30Percent: number;
  readonly secondPercent: number;
}

/** Everything one circuit yields without a clip. */
export interface Analysis {
  readonly rest: RestPoint;
  readonly figures: RestFigures;
  readonly response: readonly ResponsePoint[];
  readonly lowCornerHertz: number | null;
  readonly highCornerHertz: number | null;
  readonly distortion: readonly DistortionFigure[];
  readonly sensitivity: readonly SensitivityFigure[];
  /** Electrode voltages, and what meters make of them. */
  readonly socket: readonly SocketRow[];
  readonly cautions: readonly Caution[];
}

/** Largest value that stands for an open circuit in a result: a resistance that carries nothing measurable, ohms. */
const OPEN_OHMS = 1e15;
const ohmsOf = (siemens: number): number =>
  Math.abs(siemens) > 1 / OPEN_OHMS ? 1 / siemens : Math.sign(siemens || 1) * OPEN_OHMS;

/** Rest figures from a solved rest point. */
export function restFigures(rest: RestPoint): RestFigures {
  const { circuit, currents, tuned, phasors } = rest;
  const omega = 2 * Math.PI * circuit.station.carrierHertz;
  const { gridCathodeFarads, gridPlateFarads } = circuit.tube;
  const stageGain = magnitude(amplifierGain(rest, REFERENCE_HERTZ));
  const inputAtAudio = gridCathodeFarads + gridPlateFarads * (1 + stageGain);
  const { ohms: leak, farads: capacitor } = chargedPair(circuit);
  const grid = 1 / (1 / leak + currents.heldGridByGrid);
  const slope = currents.heldPlateByGrid;
  const plateOhms = ohmsOf(currents.heldPlateByPlate);
  const rms = tuned.carrierPeakVolts / Math.SQRT2;
  const { supplyAmps, loadWatts } = directCurrents(rest);
  const figures: RestFigures = {
    gridVolts: rest.gridVolts,
    gridAmps: currents.gridAmps,
    gridResistanceOhms: ohmsOf(currents.heldGridByGrid),
    plateVolts: rest.plateVolts,
    plateAmps: currents.plateAmps,
    amplificationFactor: slope * plateOhms,
    plateResistanceOhms: plateOhms,
    transconductanceSiemens: slope,
    stageGain,
    plateWatts: rest.plateVolts * currents.plateAmps,
    loadWatts,
    supplyAmps,
    inputCapacitanceFaradsAtAudio: inputAtAudio,
    inputCapacitanceFaradsAtCarrier: phasors.input.im / omega,
    inputResistanceOhms: ohmsOf(phasors.input.re),
    carrierAtGridVoltsRms: rms * magnitude(phasors.grid),
    carrierOnPlateVoltsRms: rms * magnitude(phasors.plate),
    leakCornerHertz: cornerOf(leak, capacitor),
    gridCornerHertz: cornerOf(grid, capacitor + (circuit.detector.diode ? 0 : inputAtAudio)),
  };
  // a diode has no plate: its second port is idle
  return circuit.detector.diode ? { ...figures, ...NO_PLATE } : figures;
}

const NO_PLATE = {
  plateVolts: 0,
  plateAmps: 0,
  amplificationFactor: 0,
  plateResistanceOhms: 0,
  transconductanceSiemens: 0,
  stageGain: 0,
  plateWatts: 0,
  loadWatts: 0,
  supplyAmps: 0,
  carrierOnPlateVoltsRms: 0,
} as const;

/** Corner of a resistance and a capacitance, Hz, held below what would be no number. */
function cornerOf(ohms: number, farads: number): number {
  return Math.min(1 / (2 * Math.PI * ohms * farads), 1e15);
}

/** Response rows at the ISO 266 third octaves from 25 Hz to 16 kHz, with the cost by part. */
export function responseRows(rest: RestPoint): ResponsePoint[] {
  const response = new LinearResponse(rest);
  const reference = magnitude(response.at(REFERENCE_HERTZ).output);
  const cost = costByPart(rest, THIRD_OCTAVE_NOMINAL_HERTZ);
  return THIRD_OCTAVE_NOMINAL_HERTZ.map((hertz, k) => {
    const output = response.at(hertz).output;
    const size = magnitude(output);
    return {
      hertz,
      decibels: ratioDecibels(size, reference),
      phaseDegrees: (Math.atan2(output.im, output.re) * 180) / Math.PI,
      voltsRmsAt30Percent: (size * TEST_MODULATION) / Math.SQRT2,
      cost: {
        tunedCircuit: cost.tunedCircuit[k] as number,
        gridCapacitor: cost.gridCapacitor[k] as number,
        plateBypass: cost.plateBypass[k] as number,
        load: cost.load[k] as number,
      },
    };
  });
}

/** Harmonic h of the output, percent of the fundamental; 0 where there is no output. */
export function harmonicPercent(tone: SteadyTone, harmonic: number): number {
  const fundamental = tone.output[1] as number;
  return fundamental > 1e-15 ? (100 * (tone.output[harmonic] as number)) / fundamental : 0;
}

/** Total harmonic distortion, harmonics 2 to 10 over the fundamental, percent. */
export function totalPercent(tone: SteadyTone): number {
  let sum = 0;
  for (let h = 2; h < tone.output.length; h++) sum += harmonicPercent(tone, h) ** 2;
  return Math.sqrt(sum);
}

/** The sensitivity curve. A level at which the circuit comes to no rest or no steady tone has no row: its own may. */
function sensitivityRows(circuit: DetectorCircuit): SensitivityFigure[] {
  let failed = 0;
  return SENSITIVITY_LEVELS.flatMap((levelVoltsRms) => {
    // each search in vain takes seconds, and the levels above fare no better
    if (failed >= 2) return [];
    try {
      const at = restPoint({ ...circuit, station: { ...circuit.station, levelVoltsRms } });
      // ten tones a circuit, told to three digits: a thousandth is enough
      const tone = steadyTone(at, REFERENCE_HERTZ, TEST_MODULATION, SURVEYED);
      const audioVoltsRmsAt30Percent = (tone.output[1] as number) / Math.SQRT2;
      return [{ levelVoltsRms, audioVoltsRmsAt30Percent, secondPercent: harmonicPercent(tone, 2) }];
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      failed++;
      return [];
    }
  });
}

/** The whole analysis of one circuit. Raises InputError as `restPoint` and `steadyTone` do. */
export function analyse(
  circuit: DetectorCircuit,
  ratings: Ratings | null = null,
  meters: readonly Meter[] = COMMON_METERS,
): Analysis {
  const rest = restPoint(circuit);
  const response = responseRows(rest);
  const { lowHertz, highHertz } = corners(new LinearResponse(rest));
  const distortion = DISTORTION_TONES.map(([hertz, depth]) => {
    const tone = steadyTone(rest, hertz, depth);
    return {
      hertz,
      modulationPercent: 100 * depth,
      secondPercent: harmonicPercent(tone, 2),
      thirdPercent: harmonicPercent(tone, 3),
      totalPercent: totalPercent(tone),
    };
  });
  const sensitivity = sensitivityRows(circuit);
  const cautions = restCautions(rest, ratings);
  const treble = response.find((row) => row.hertz === 5000);
  // a bypass that costs less than a barely audible half decibel behind a load that costs far more
  if (treble && circuit.plate.bypassFarads > 0 && treble.cost.plateBypass < 0.5 && treble.cost.load > 3) {
    cautions.push({ code: 'bypass-inaudible', figure: treble.cost.plateBypass, limit: treble.cost.load });
  }
  return {
    rest,
    figures: restFigures(rest),
    response,
    lowCornerHertz: lowHertz,
    highCornerHertz: highHertz,
    distortion,
    sensitivity,
    socket: circuit.detector.kind === 'grid leak' ? socketRows(rest, meters) : [],
    cautions,
  };
}
