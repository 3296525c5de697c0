import type { RestPoint } from '../../engine/circuits/rest-point.ts';
import type { StageLaws } from '../../engine/circuits/stage-currents.ts';
import { DetectorRenderer } from '../../engine/renderer/detector-renderer.ts';

/** What is to be heard: a detector at rest with its laws, the programme as its station sends it, and its gain. */
export interface LiveDetector {
  readonly rest: RestPoint;
  readonly laws: StageLaws;
  /** m·p, the length of the clip. */
  readonly modulation: Float64Array;
  /** Sample value a volt. */
  readonly gain: number;
}

/** Programme that a detector is run through before it is heard, s: the slowest part of a usual set has settled. */
const WARM_SECONDS = 0.25;
/** Length of a change from one detector to another, s. */
const FADE_SECONDS = 0.01;
const BLOCK = 128;

interface Running {
  readonly detector: LiveDetector;
  readonly renderer: DetectorRenderer;
  readonly volts: Float64Array;
}

/**
 * Plays a clip in a loop through one detector at a time, the engine running live. A change is heard at the same instant of
 * the programme: the new detector is first run through the quarter second before it, then the two are faded over 10 ms.
 */
export class LivePlayer {
  private readonly rateHertz: number;
  private readonly frames: number;
  private readonly input = new Float64Array(BLOCK);
  private now: Running;
  private before: Running | null = null;
  /** Frames of the fade still to come. */
  private fading = 0;
  /** Place in the clip of the next frame, frames. */
  private place = 0;
  private paused = false;
  private gain: number;

  constructor(first: LiveDetector, rateHertz: number) {
    this.rateHertz = rateHertz;
    this.frames = first.modulation.length;
    this.gain = first.gain;
    this.now = this.start(first);
  }

  /** Place in the clip, s. */
  get seconds(): number {
    return this.place / this.rateHertz;
  }

  get isPaused(): boolean {
    return this.paused;
  }

  /** Stops or goes on at the same place. */
  pause(paused: boolean): void {
    this.paused = paused;
  }

  /** Another detector from here on. */
  change(detector: LiveDetector): void {
    const next = this.start(detector);
    this.before = this.now;
    this.now = next;
    this.fading = Math.round(FADE_SECONDS * this.rateHertz);
  }

  /** A new gain for what is heard; it is reached over the next block, without a step. */
  setGain(gain: number): void {
    this.now = { ...this.now, detector: { ...this.now.detector, gain } };
  }

  /** Fills `output` with `frames` samples, at most 128. */
  process(output: Float32Array, frames: number): void {
    if (this.paused) {
      output.fill(0, 0, frames);
      return;
    }
    const { now, before, place } = this;
    this.run(now, place, frames);
    if (before) this.run(before, place, frames);
    const whole = Math.round(FADE_SECONDS * this.rateHertz);
    const step = (now.detector.gain - this.gain) / frames;
    for (let n = 0; n < frames; n++) {
      this.gain += step;
      let value = this.gain * (now.volts[n] as number);
      if (before && this.fading > 0) {
        // equal power would swell, since both carry the same programme
        const share = this.fading / whole;
        value += share * (before.detector.gain * (before.volts[n] as number) - value);
        this.fading--;
      }
      output[n] = value;
    }
    if (this.fading <= 0) this.before = null;
    this.place = (place + frames) % this.frames;
  }

  private start(detector: LiveDetector): Running {
    const renderer = new DetectorRenderer(detector.rest, detector.laws, this.rateHertz);
    const running = { detector, renderer, volts: new Float64Array(BLOCK) };
    // the output trails the input: what is fed first is what comes before the place by the warming and the delay
    const warm = Math.round(WARM_SECONDS * this.rateHertz) + renderer.delaySamples;
    for (let done = 0; done < warm; done += BLOCK) {
      const count = Math.min(BLOCK, warm - done);
      this.feed(detector, this.place + renderer.delaySamples - warm + done, count);
      renderer.process(this.input, running.volts, count);
    }
    return running;
  }

  private run({ detector, renderer, volts }: Running, place: number, frames: number): void {
    this.feed(detector, place + renderer.delaySamples, frames);
    renderer.process(this.input, volts, frames);
  }

  /** The programme from a place on, looped. */
  private feed({ modulation }: LiveDetector, from: number, count: number): void {
    const length = this.frames;
    for (let n = 0; n < count; n++) {
      this.input[n] = modulation[(((from + n) % length) + length) % length] as number;
    }
  }
}
