import { type RestPoint, restPoint } from '../engine/circuits/rest-point.ts';
import type { StageLaws } from '../engine/circuits/stage-currents.ts';
import { heardThrough } from '../engine/hearing/hearing-filter.ts';
import { integratedLoudness } from '../engine/measure/loudness.ts';
import { DetectorRenderer } from '../engine/renderer/detector-renderer.ts';
import type { FromWorker, WantedCircuit } from './messages.ts';
import type { Prepared, Workshop } from './workshop.ts';

/** Seconds rendered before the place that is heard, so that the circuit has settled there. */
const LEAD_SECONDS = 0.2;
/** Seconds of the first stretch: enough to go on with while the next is rendered. */
const FIRST_SECONDS = 0.35;
/** Seconds of the part at least, and as a share of the clip: the whole must be ready before the part ends. */
const PART_SECONDS = 2.5;
const PART_SHARE = 1 / 8;
/** Seconds between two chances to take up something more urgent. */
const TURN_SECONDS = 0.25;

/** What a job does next: the first stretch of its part is urgent, more of the part less so, the whole can wait. */
export type Stage = 'part' | 'more' | 'whole';

/**
 * Renders one circuit in small turns: the stretch around the place that is heard first, then the whole clip from its
 * start, which is what the command renders. Yields its stage before every turn.
 */
export function* soundJob(
  workshop: Workshop,
  id: number,
  wanted: WantedCircuit,
  from: number,
  post: (message: FromWorker) => void,
): Generator<Stage, void> {
  yield 'part';
  const prepared = workshop.prepare(wanted);
  const rest = restPoint(prepared.circuit);
  const { modulation } = prepared.programme;
  const still = modulation.every((value) => value === 0);
  const laws = workshop.tables.lawsFor(rest, largest(modulation));
  if (!still) yield* part(workshop, id, prepared, rest, laws, from, post);
  yield 'whole';
  const volts = new Float64Array(modulation.length);
  // a carrier alone leaves the stage at rest; rendered, its last digits would be brought up to full scale and heard
  if (!still) yield* wholeClip(workshop, rest, laws, modulation, volts);
  post({ kind: 'whole', id, ...finished(workshop, prepared, volts) });
}

function* part(
  workshop: Workshop,
  id: number,
  prepared: Prepared,
  rest: RestPoint,
  laws: StageLaws,
  from: number,
  post: (message: FromWorker) => void,
): Generator<Stage, void> {
  const { sampleRateHertz, quality, fullScaleVolts } = workshop.opening;
  const { modulation } = prepared.programme;
  const frames = (seconds: number): number => Math.round(seconds * sampleRateHertz);
  const length = Math.min(
    modulation.length - from,
    Math.max(frames(PART_SECONDS), Math.round(modulation.length * PART_SHARE)),
  );
  if (length <= 0) return;
  const start = Math.max(0, from - frames(LEAD_SECONDS));
  const run = new ClipRun(rest, laws, modulation.subarray(start), sampleRateHertz, quality);
  const volts = new Float64Array(from - start + length);
  let posted = from - start;
  for (let goal = posted + frames(FIRST_SECONDS); posted < volts.length; goal = posted + frames(2 * TURN_SECONDS)) {
    const end = Math.min(goal, volts.length);
    run.renderTo(end, volts);
    // a hearing curve rings on from before: the lead is heard through it too
    const heard = heardThrough(volts.subarray(0, end), prepared.heard, sampleRateHertz);
    const samples = scaled(heard.subarray(posted, end), fullScaleVolts);
    post({ kind: 'part', id, from, length, first: posted === from - start, samples });
    posted = end;
    yield 'more';
  }
}

function* wholeClip(
  workshop: Workshop,
  rest: RestPoint,
  laws: StageLaws,
  modulation: Float64Array,
  volts: Float64Array,
): Generator<Stage, void> {
  const { sampleRateHertz, quality } = workshop.opening;
  const run = new ClipRun(rest, laws, modulation, sampleRateHertz, quality);
  const turn = Math.round(TURN_SECONDS * sampleRateHertz);
  for (let end = turn; run.done < volts.length; end += turn) {
    run.renderTo(Math.min(end, volts.length), volts);
    yield 'whole';
  }
}

/** The whole volts of a circuit as the command renders them, before any scale. */
export function wholeVolts(workshop: Workshop, prepared: Prepared): Float64Array {
  const rest = restPoint(prepared.circuit);
  const { modulation } = prepared.programme;
  const volts = new Float64Array(modulation.length);
  if (modulation.some((value) => value !== 0)) {
    const laws = workshop.tables.lawsFor(rest, largest(modulation));
    for (const _ of wholeClip(workshop, rest, laws, modulation, volts));
  }
  return heardThrough(volts, prepared.heard, workshop.opening.sampleRateHertz);
}

function finished(
  workshop: Workshop,
  prepared: Prepared,
  volts: Float64Array,
): { samples: Float32Array; peak: number; loudnessLufs: number | null } {
  const { sampleRateHertz, fullScaleVolts } = workshop.opening;
  const heard = heardThrough(volts, prepared.heard, sampleRateHertz);
  const flat = heard.map((value) => value / fullScaleVolts);
  const samples = Float32Array.from(flat);
  return { samples, peak: peakOf(flat), loudnessLufs: integratedLoudness([flat], sampleRateHertz) };
}

/** A clip through one detector from its rest on, in stretches, the filters' delay taken out. */
class ClipRun {
  /** Frames rendered so far. */
  done = 0;
  private readonly renderer: DetectorRenderer;
  private readonly modulation: Float64Array;
  private fed = 0;

  constructor(rest: RestPoint, laws: StageLaws, modulation: Float64Array, rate: number, quality: 'normal' | 'fine') {
    this.renderer = new DetectorRenderer(rest, laws, rate, quality);
    this.modulation = modulation;
  }

  /** Renders up to frame `end`, into `volts` at the same places. */
  renderTo(end: number, volts: Float64Array): void {
    const { renderer, modulation } = this;
    const delay = renderer.delaySamples;
    const frames = Math.max(0, end + delay - this.fed);
    const input = new Float64Array(frames);
    const output = new Float64Array(frames);
    for (let n = 0; n < frames; n++) input[n] = modulation[this.fed + n] ?? 0;
    renderer.process(input, output, frames);
    for (let n = 0; n < frames; n++) {
      const at = this.fed + n - delay;
      if (at >= 0) volts[at] = output[n] as number;
    }
    this.fed += frames;
    this.done = end;
  }
}

function scaled(volts: Float64Array, fullScaleVolts: number): Float32Array {
  return Float32Array.from(volts, (value) => value / fullScaleVolts);
}

export function peakOf(samples: Float64Array): number {
  let most = 0;
  for (const value of samples) most = Math.max(most, Math.abs(value));
  return most;
}

function largest(samples: Float64Array): number {
  let most = 0;
  for (const value of samples) if (value > most) most = value;
  return most;
}
