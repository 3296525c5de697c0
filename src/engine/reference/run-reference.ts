import type { DetectorCircuit } from '../circuits/circuit.ts';
import { blockHarmonics } from './block-harmonics.ts';
import { checkReference } from './check-request.ts';
import { packLaws, type StageLaws } from './instantaneous-laws.ts';
import type { Listening } from './plate-wiring.ts';
import { settleStage } from './reference-rest.ts';
import { type ReferenceSource, tonePhasors } from './source-drive.ts';
import type { Companion, Observation } from './trapezoidal-companion.ts';
import {
  advance,
  BLOCKS_PER_CYCLE,
  clearSums,
  makeStepper,
  newtonPasses,
  presetSlowVolts,
  SUM_GRID_COS,
  SUM_GRID_SIN,
  SUM_PLATE_COS,
  SUM_PLATE_SIN,
} from './two-port-stepper.ts';

/** One test tone. The envelope at the station is 1 + modulation · cos(2π·audioHertz·t). */
export interface ReferenceTone {
  readonly audioHertz: number;
  readonly modulation: number;
  readonly source: ReferenceSource;
  readonly stage?: StageLaws;
}

/** Cycle means at the start, volts; what is left out is the rest point with unmodulated carrier. */
export interface ReferenceStart {
  readonly gridVolts: number;
  readonly plateVolts: number;
  readonly outputVolts?: number;
  /** Plate minus output; taken when outputVolts is absent. */
  readonly couplingVolts?: number;
}

export interface ReferenceOptions {
  /** Steps in a carrier cycle, a multiple of 8; 96 unless given. */
  readonly stepsPerCycle?: number;
  /** Time before the periods that are measured, s; at least one audio period is always run. */
  readonly settleSeconds: number;
  /** Audio periods measured together; 1 unless given. */
  readonly periods?: number;
  readonly start?: ReferenceStart;
  /** Called now and then with the part done, 0 to 1. */
  readonly onProgress?: (done: number) => void;
}

export interface ReferenceNode {
  readonly meanVolts: number;
  /** Peak volts of harmonics 1 to 10 at their index; index 0 holds the mean. */
  readonly peaks: Float64Array;
}

export interface ReferenceResult {
  readonly audioHertz: number;
  /** The carrier as used: the nearest whole multiple of the tone. */
  readonly carrierHertz: number;
  readonly output: ReferenceNode;
  readonly grid: ReferenceNode;
  readonly plate: ReferenceNode;
  /** Carrier line alone (sidebands apart) over the measured periods, V rms. */
  readonly carrierAtGridVoltsRms: number;
  readonly carrierOnPlateVoltsRms: number;
  /** Relative change of the output's fundamental between the last two audio periods. */
  readonly drift: number;
  /** Mean Newton passes a step. */
  readonly newtonPasses: number;
}

/**
 * Integrates a detector through every carrier cycle of a test tone.
 *
 * The trapezoidal rule with instantaneous laws, from the rest point with unmodulated carrier unless a start is given.
 * A coil's tuning capacitance is scaled with the carrier's adjustment, so that a tank stays as far in or out of tune.
 * Throws InputError for a request out of range, RangeError when the circuit cannot be solved.
 */
export function runReference(
  circuit: DetectorCircuit,
  tone: ReferenceTone,
  options: ReferenceOptions,
): ReferenceResult {
  const stepsPerCycle = options.stepsPerCycle ?? 96;
  const periods = options.periods ?? 1;
  checkReference(circuit, tone.source, stepsPerCycle, tone.stage, tone, {
    settleSeconds: options.settleSeconds,
    periods,
  });
  const { audioHertz, modulation } = tone;
  const asked = circuit.station.carrierHertz;
  const cyclesPerPeriod = Math.round(asked / audioHertz);
  const carrierHertz = cyclesPerPeriod * audioHertz;
  const source = tuneWithCarrier(tone.source, asked / carrierHertz);
  const settled = settleStage(circuit, source, carrierHertz, stepsPerCycle, tone.stage);
  const { companion, wired, peakDrive } = settled;
  const drive =
    source.kind === 'stiff'
      ? tonePhasors(peakDrive, modulation, audioHertz, carrierHertz, source.loadedQ, source.detuneHertz)
      : tonePhasors(peakDrive, modulation, audioHertz, carrierHertz, 0, 0);
  const s = makeStepper(
    companion,
    packLaws(circuit.tube, tone.stage),
    stepsPerCycle,
    cyclesPerPeriod,
    drive,
    observeListening(companion, wired.heard),
  );
  s.state.set(settled.state);
  const { rest } = settled;
  presetSlowVolts(s, rest.plateVolts);
  if (options.start) {
    const { start } = options;
    const outputVolts =
      start.outputVolts ?? (start.couplingVolts === undefined ? 0 : start.plateVolts - start.couplingVolts);
    for (const [node, volts] of [
      [wired.grid, start.gridVolts - rest.gridVolts],
      [wired.plate, start.plateVolts - rest.plateVolts],
      [wired.heard.a, outputVolts],
    ] as const) {
      const shift = companion.shift(node, volts);
      for (let r = 0; r < shift.length; r++) s.state[r]! += shift[r]!;
    }
    presetSlowVolts(s, start.plateVolts);
  }
  // The tone starts where its envelope crosses the carrier, so that nothing jumps.
  s.cycle = Math.round(0.75 * cyclesPerPeriod) % cyclesPerPeriod;

  const settleCycles = Math.ceil(options.settleSeconds * carrierHertz);
  const before = Math.max(0, settleCycles - cyclesPerPeriod);
  const recorded = (periods + 1) * cyclesPerPeriod;
  const total = before + recorded;
  let done = 0;
  const run = (cycles: number): void => {
    const chunk = Math.max(200, Math.ceil(total / 50));
    for (let left = cycles; left > 0; ) {
      const now = Math.min(chunk, left);
      advance(s, now);
      left -= now;
      done += now;
      options.onProgress?.(done / total);
    }
  };
  run(before);
  const blocksPerPeriod = cyclesPerPeriod * BLOCKS_PER_CYCLE;
  s.blocks = new Float64Array(3 * blocksPerPeriod * (periods + 1));
  s.blockAt = 0;
  run(cyclesPerPeriod);
  clearSums(s);
  run(periods * cyclesPerPeriod);

  const stepsPerBlock = stepsPerCycle / BLOCKS_PER_CYCLE;
  const node = (channel: number): ReferenceNode => {
    const peaks = blockHarmonics(s.blocks, 3 * blocksPerPeriod, channel, blocksPerPeriod, periods, stepsPerBlock);
    return { meanVolts: peaks[0]!, peaks };
  };
  const output = node(2);
  const lastTwo = [periods - 1, periods].map(
    (p) => blockHarmonics(s.blocks, 3 * blocksPerPeriod * p, 2, blocksPerPeriod, 1, stepsPerBlock)[1]!,
  );
  const steps = periods * cyclesPerPeriod * stepsPerCycle;
  const rms = (cos: number, sin: number): number => (Math.SQRT2 * Math.hypot(s.memory[cos]!, s.memory[sin]!)) / steps;
  return {
    audioHertz,
    carrierHertz,
    output,
    grid: node(0),
    plate: node(1),
    carrierAtGridVoltsRms: rms(SUM_GRID_COS, SUM_GRID_SIN),
    carrierOnPlateVoltsRms: rms(SUM_PLATE_COS, SUM_PLATE_SIN),
    drift: lastTwo[1]! > 0 ? Math.abs(lastTwo[1]! - lastTwo[0]!) / lastTwo[1]! : 0,
    newtonPasses: newtonPasses(s),
  };
}

/** A tank's resonance goes as 1/sqrt(C): C is scaled by the square of asked over used carrier. */
function tuneWithCarrier(source: ReferenceSource, askedOverUsed: number): ReferenceSource {
  if (source.kind === 'stiff') return source;
  const scale = askedOverUsed * askedOverUsed;
  return {
    ...source,
    tankFarads: source.tankFarads * scale,
    ...(source.openTankFarads === undefined ? {} : { openTankFarads: source.openTankFarads * scale }),
  };
}

/** What is heard, as the loop reads node volts. */
function observeListening(companion: Companion, { a, b, gain }: Listening): Observation {
  const high = companion.observe(a);
  const low = companion.observe(b);
  const between = (x: Float64Array, y: Float64Array): Float64Array => x.map((value, k) => gain * (value - y[k]!));
  return {
    row: between(high.row, low.row),
    held: gain * (high.held - low.held),
    drive: gain * (high.drive - low.drive),
    port: between(high.port, low.port),
  };
}
