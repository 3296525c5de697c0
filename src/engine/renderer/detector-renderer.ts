import type { RestPoint } from '../circuits/rest-point.ts';
import type { StageLaws } from '../circuits/stage-currents.ts';
import { TunedEnvelope } from '../station/tuned-envelope.ts';
import { STAGE_TIMES } from './implicit-rule.ts';
import { Kernel } from './kernel/kernel.ts';
import { MOST_UNKNOWNS } from './kernel/layout.ts';
import { Decimator, filterDelay, Interpolator } from './resampling.ts';
import { StageStepper } from './stage-stepper.ts';
import type { TableLaws } from './table-store.ts';

/**
 * Steps a second at least, Hz: one a sample of a 44.1 or 48 kHz clip. Each solves the circuit at three instants, 144,000 a
 * second at 48 kHz, and tells the output at two.
 */
export const LEAST_STEPS_HERTZ = 44_000;

/** `normal` takes at least 44,000 steps a second, `fine` twice that. */
export type Quality = 'normal' | 'fine';

/** Steps to a clip sample at a quality. */
export function stepsPerSample(clipRateHertz: number, quality: Quality): number {
  const base = Math.max(1, Math.ceil(LEAST_STEPS_HERTZ / clipRateHertz));
  return quality === 'fine' ? 2 * base : base;
}

/**
 * A detector as a block processor: modulation in, output volts (rest volts included) out, at the clip's rate.
 * Everything is allocated in the constructor; any split into blocks gives the same samples. The output trails the
 * input by `delaySamples`.
 */
export class DetectorRenderer {
  readonly delaySamples: number;
  private readonly stepper: StageStepper;
  /** The loop as WebAssembly where the laws are tables; null: the plain stepper does it. */
  private readonly kernel: Kernel | null;
  private readonly rest: RestPoint;
  private readonly steps: number;
  private readonly interpolator: Interpolator;
  /** The same for the second part of a station's envelope. */
  private readonly other: Interpolator;
  private readonly otherDrives: Float64Array;
  private readonly decimator: Decimator;
  private readonly envelope: TunedEnvelope;
  private readonly drives: Float64Array;
  private readonly volts: Float64Array;
  private readonly restVolts: number;

  /**
   * @param rest    the circuit at rest
   * @param laws    its averaged laws, as tables for speed
   * @param clipRateHertz  8 kHz to 192 kHz
   * @param kind    `plain` keeps to the stepper in this language, against which the kernel is tested
   */
  constructor(
    rest: RestPoint,
    laws: StageLaws,
    clipRateHertz: number,
    quality: Quality = 'normal',
    kind: 'fastest' | 'plain' = 'fastest',
  ) {
    this.rest = rest;
    this.steps = stepsPerSample(clipRateHertz, quality);
    const stepSeconds = 1 / (clipRateHertz * this.steps);
    const fractions: number[] = [];
    for (let k = 0; k < this.steps; k++) for (const t of STAGE_TIMES) fractions.push((k + t) / this.steps);
    this.interpolator = new Interpolator(clipRateHertz, fractions);
    this.other = new Interpolator(clipRateHertz, fractions);
    this.otherDrives = new Float64Array(fractions.length);
    this.decimator = new Decimator(clipRateHertz, 2 * this.steps);
    const { station } = rest.circuit;
    this.envelope = new TunedEnvelope(station.carrierHertz, rest.tuned.loadedQ, rest.tuned.detuneHertz, stepSeconds);
    this.stepper = new StageStepper(rest, laws, stepSeconds);
    this.stepper.tank?.setWeights(this.envelope.sourceWeights);
    this.drives = new Float64Array(fractions.length);
    this.volts = new Float64Array(2 * this.steps);
    this.delaySamples = 2 * filterDelay(clipRateHertz) - 1;
    this.restVolts = (rest.unknowns[rest.audio.output.index] as number) * rest.audio.output.weight;
    const { interpolator, decimator, envelope, stepper, restVolts } = this;
    this.kernel =
      kind !== 'plain' && isTabulated(laws) && laws.knee && rest.audio.system.size <= MOST_UNKNOWNS
        ? new Kernel({
            rest,
            stepper,
            grid: laws.grid,
            cathode: laws.cathode,
            envelopeWeights: envelope.weights,
            tuned: envelope.tuned,
            filters: {
              steps: this.steps,
              half: decimator.half,
              phases: interpolator.phases,
              rows: decimator.rows,
              middle: decimator.middle,
            },
            restVolts,
          })
        : null;
    this.reset();
  }

  /** Newton passes, steps that did not settle, steps, and steps settled with kept slopes, since reset. */
  get counts(): { passes: number; unsettled: number; steps: number; quick: number } {
    const { passes, unsettled, steps, quick } = this.kernel?.counts() ?? this.stepper;
    return { passes, unsettled, steps, quick };
  }

  /** Rest volts at the output, V. */
  get outputRestVolts(): number {
    return this.restVolts;
  }

  reset(): void {
    this.interpolator.reset();
    this.other.reset();
    this.decimator.reset();
    this.envelope.reset();
    this.stepper.reset();
    this.kernel?.reset();
  }

  /**
   * @param input   modulation m·p, `frames` long at least
   * @param output  output volts less the rest volts, V
   * @param quadrature  second part of the station's envelope, in quadrature to the carrier, where it has one: then in
   *   every block from the first
   */
  process(
    input: Float64Array | Float32Array,
    output: Float64Array | Float32Array,
    frames: number,
    quadrature: Float64Array | null = null,
  ): void {
    if (this.kernel) {
      this.kernel.process(input, output, frames, quadrature);
      return;
    }
    const { interpolator, decimator, envelope, stepper, drives, steps, restVolts } = this;
    const peak = this.rest.tuned.carrierPeakVolts;
    const { magnitudes } = envelope;
    const { drive, heard, tank } = stepper;
    const { volts, other, otherDrives } = this;
    const second = quadrature === null ? null : otherDrives;
    const stages = drive.length;
    for (let n = 0; n < frames; n++) {
      interpolator.process(input, n, drives);
      if (quadrature) other.process(quadrature, n, otherDrives);
      for (let k = 0; k < steps; k++) {
        if (tank) {
          envelope.open(drives, stages * k, second);
          tank.ahead.set(envelope.ahead);
          stepper.step();
          envelope.finish(tank.envelope[2 * stages - 2] as number, tank.envelope[2 * stages - 1] as number);
        } else {
          envelope.step(drives, stages * k, second);
          for (let s = 0; s < stages; s++) drive[s] = peak * (magnitudes[s] as number);
          stepper.step();
        }
        volts[2 * k] = (heard[0] as number) - restVolts;
        volts[2 * k + 1] = (heard[1] as number) - restVolts;
      }
      decimator.process(volts, output, n);
    }
  }
}

function isTabulated(laws: StageLaws): laws is TableLaws {
  return 'parts' in laws.grid && 'parts' in laws.cathode;
}
