import type { Output, Plate } from '../engine/circuits/circuit.ts';
import type { SocketRow } from '../engine/circuits/meter-readings.ts';
import type { TubeLaw } from '../engine/tubes/tube.ts';
import type { OnTheAirRecord } from './air-record.ts';

/** The result file's shape. Keys carry their units; numbers are base SI units unless the key says otherwise. */
export interface Result {
  readonly format: 'presolder-result/1';
  /** Absent in a result without a clip. */
  readonly clip?: ClipSummary;
  /** Volts at the output that stand at digital full scale, before each variant's gain; absent without a clip. */
  readonly fullScaleVolts?: number;
  /** A response measured by the builder, over which the variants are laid; absent when none was given. */
  readonly measured?: MeasuredRecord;
  readonly variants: readonly VariantResult[];
}

export interface MeasuredRecord {
  readonly file: string;
  /** Rising in frequency; dB re its own level at 400 Hz. */
  readonly points: readonly { readonly hertz: number; readonly decibels: number }[];
}

export interface ClipSummary {
  readonly file: string;
  readonly seconds: number;
  readonly sampleRateHertz: number;
  readonly limitedSamples: number;
}

export interface VariantResult {
  readonly name: string;
  /** Dotted key of the parts list to the value as written. */
  readonly changes: Readonly<Record<string, string>>;
  readonly circuit: CircuitRecord;
  readonly rest: RestRecord;
  /** Electrode voltages, true and as meters read them. */
  readonly socket: readonly SocketRow[];
  readonly response: readonly ResponseRow[];
  readonly lowCornerHertz: number | null;
  readonly highCornerHertz: number | null;
  readonly distortion: readonly DistortionRow[];
  readonly sensitivity: readonly SensitivityRow[];
  readonly sound?: SoundRecord;
  /** What is on the air besides the wanted station, and how well it is heard; absent where there is nothing. */
  readonly onTheAir?: OnTheAirRecord;
  /** What it is heard through; absent when that is flat. The sound goes through it, the response does not. */
  readonly heardThrough?: { readonly name: string; readonly source: string };
  /** How far the response is from the measured one, rms over its readings; absent when none was given. */
  readonly measured?: { readonly rmsDifferenceDecibels: number };
  readonly cautions: readonly string[];
}

/** The values the equations used, strays folded in, so that the circuit can be solved again from this file alone. */
export interface CircuitRecord {
  readonly station: { readonly carrierHertz: number; readonly levelVoltsRms: number; readonly modulation: number };
  readonly tunedCircuit: {
    readonly loadedQ: number;
    readonly detuneHertz: number;
    readonly unloadedQ: number | null;
    readonly coilHenries: number | null;
    readonly tap: number;
    readonly retuned: boolean | null;
  };
  readonly detector: {
    readonly kind: string;
    readonly law: string;
    readonly gridCapacitorFarads: number;
    readonly leakOhms: number;
    readonly leakPosition: string;
    readonly leakReturnVolts: number;
    readonly capacitorLeakageOhms: number | null;
    readonly chargeOhms: number | null;
  };
  readonly tube: {
    readonly type: string;
    readonly law: TubeLaw;
    readonly gridPlateFarads: number;
    readonly gridCathodeFarads: number;
    readonly plateCathodeFarads: number;
  };
  readonly plate: Plate;
  readonly output: Output;
}

export interface RestRecord {
  readonly gridVolts: number;
  readonly gridAmps: number;
  readonly gridResistanceOhms: number;
  readonly plateVolts: number;
  readonly plateAmps: number;
  readonly amplificationFactor: number;
  readonly plateResistanceOhms: number;
  readonly transconductanceSiemens: number;
  /** Grid to plate at 400 Hz, magnitude. */
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

export interface ResponseRow {
  readonly hertz: number;
  /** dB re 400 Hz. */
  readonly decibels: number;
  /** Output against the station's envelope. */
  readonly phaseDegrees: number;
  readonly voltsRmsAt30Percent: number;
  readonly cost: CostRow;
  /** What the variant is heard through, dB re 400 Hz, apart from the circuit's response; absent when that is flat. */
  readonly heardThroughDecibels?: number;
}

/** dB that would come back at this frequency if the part's audio admittance alone were ideal. */
export interface CostRow {
  readonly tunedCircuit: number;
  readonly gridCapacitor: number;
  readonly plateBypass: number;
  /** The plate load with what it feeds: coupling capacitor and load capacitance together. */
  readonly load: number;
}

export interface DistortionRow {
  readonly hertz: number;
  readonly modulationPercent: number;
  readonly secondPercent: number;
  readonly thirdPercent: number;
  readonly totalPercent: number;
}

export interface SensitivityRow {
  readonly levelVoltsRms: number;
  readonly audioVoltsRmsAt30Percent: number;
  readonly secondPercent: number;
}

export interface SoundRecord {
  readonly file: string;
  readonly gainDecibels: number;
  readonly loudnessLufs: number | null;
  readonly peakVolts: number;
}
