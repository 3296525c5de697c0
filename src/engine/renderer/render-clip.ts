import type { RestPoint } from '../circuits/rest-point.ts';
import type { StageLaws } from '../circuits/stage-currents.ts';
import { InputError } from '../errors.ts';
import { DetectorRenderer, type Quality } from './detector-renderer.ts';

/** A clip through one detector. */
export interface RenderedClip {
  /** Output volts less the rest volts, same length as the clip and in time with it. */
  readonly volts: Float64Array;
  readonly peakVolts: number;
  /** Steps whose equations did not settle within the passes allowed: 0 in a sound render. */
  readonly unsettledSteps: number;
  /** Mean Newton passes a step. */
  readonly passesPerStep: number;
}

const BLOCK = 4096;
/** Share of steps that may stay unsettled before there is nothing left to hear; a caution tells of fewer. */
const MOST_UNSETTLED = 0.01;

/**
 * Renders a whole clip: the detector starts at rest, the filters' delay is taken out.
 *
 * @param modulation  m·p, any length
 * @param quadrature  second part of the station's envelope, same length, where it has one
 * @param onBlock     told the frames done after each block; may throw to stop
 */
export function renderClip(
  rest: RestPoint,
  laws: StageLaws,
  modulation: Float64Array,
  clipRateHertz: number,
  quality: Quality = 'normal',
  onBlock: (framesDone: number) => void = () => {},
  quadrature: Float64Array | null = null,
): RenderedClip {
  const volts = new Float64Array(modulation.length);
  const blocks = clipBlocks(rest, laws, modulation, clipRateHertz, quality, quadrature, volts);
  for (;;) {
    const { done, value } = blocks.next();
    if (done) return value;
    onBlock(value);
  }
}

/**
 * The same, awaiting `onBlock` after each block, so that the caller can let other work and signals in.
 *
 * @param into  takes the volts: as long as the modulation, which it may be itself, since output never overtakes input
 */
export async function renderClipInTurns(
  rest: RestPoint,
  laws: StageLaws,
  modulation: Float64Array,
  clipRateHertz: number,
  quality: Quality,
  onBlock: (framesDone: number) => void | Promise<void>,
  quadrature: Float64Array | null = null,
  into: Float64Array = new Float64Array(modulation.length),
): Promise<RenderedClip> {
  const blocks = clipBlocks(rest, laws, modulation, clipRateHertz, quality, quadrature, into);
  for (;;) {
    const { done, value } = blocks.next();
    if (done) return value;
    await onBlock(value);
  }
}

/** Renders block by block, giving the frames done. */
function* clipBlocks(
  rest: RestPoint,
  laws: StageLaws,
  modulation: Float64Array,
  clipRateHertz: number,
  quality: Quality,
  quadrature: Float64Array | null,
  volts: Float64Array,
): Generator<number, RenderedClip> {
  const renderer = new DetectorRenderer(rest, laws, clipRateHertz, quality);
  const delay = renderer.delaySamples;
  const input = new Float64Array(BLOCK);
  const second = quadrature === null ? null : new Float64Array(BLOCK);
  const output = new Float64Array(BLOCK);
  let peakVolts = 0;
  const total = modulation.length + delay;
  for (let from = 0; from < total; from += BLOCK) {
    const frames = Math.min(BLOCK, total - from);
    for (let n = 0; n < frames; n++) input[n] = from + n < modulation.length ? (modulation[from + n] as number) : 0;
    if (second && quadrature) for (let n = 0; n < frames; n++) second[n] = quadrature[from + n] ?? 0;
    renderer.process(input, output, frames, second);
    for (let n = 0; n < frames; n++) {
      const at = from + n - delay;
      if (at < 0) continue;
      const value = output[n] as number;
      volts[at] = value;
      const size = Math.abs(value);
      // what is no number stays the peak
      if (!(size <= peakVolts)) peakVolts = size;
    }
    yield Math.min(from + frames, modulation.length);
  }
  const { steps, passes, quick, unsettled } = renderer.counts;
  if (!Number.isFinite(peakVolts) || unsettled > MOST_UNSETTLED * steps) {
    throw new InputError({
      code: 'no-sound',
      where: 'circuit',
      got: `a detector whose voltages did not settle at ${unsettled} of ${steps} moments of the sound`,
      expected: 'values that it settles with',
      hint: 'check level, leak, load and supply for a slipped decimal, or take --law tube',
    });
  }
  return {
    volts,
    peakVolts,
    unsettledSteps: unsettled,
    passesPerStep: steps > 0 ? (passes + quick) / steps : 0,
  };
}
