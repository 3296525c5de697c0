import { PLAYER, type ToPlayer } from '../player/messages.ts';
import type { MixerState } from '../player/mixer.ts';

/** Seconds over which the volume moves. */
const VOLUME_SECONDS = 0.02;

/**
 * The player on the audio thread. It is started by the first press of play, since browsers let no page sound before; all
 * that was told before is kept until then.
 */
export class PlayerLink {
  private readonly programText: string;
  private readonly sampleRateHertz: number;
  private readonly frames: number;
  private readonly onState: (state: MixerState) => void;
  private early: ToPlayer[] = [];
  private node: AudioWorkletNode | null = null;
  private volume: GainNode | null = null;
  private level = 1;
  private starting: Promise<void> | null = null;

  constructor(programText: string, sampleRateHertz: number, frames: number, onState: (state: MixerState) => void) {
    this.programText = programText;
    this.sampleRateHertz = sampleRateHertz;
    this.frames = frames;
    this.onState = onState;
  }

  tell(message: ToPlayer): void {
    if (!this.node) this.early.push(message);
    else this.node.port.postMessage(message, message.kind === 'fill' ? [message.samples.buffer] : []);
  }

  /** Starts the audio thread if it does not run yet; rejects where the browser has none. */
  start(): Promise<void> {
    this.starting ??= this.begin();
    return this.starting;
  }

  /** @param amplitude  0 to 1 */
  setVolume(amplitude: number): void {
    this.level = amplitude;
    if (this.volume) this.volume.gain.setTargetAtTime(amplitude, this.volume.context.currentTime, VOLUME_SECONDS);
  }

  private async begin(): Promise<void> {
    const context = new AudioContext({ sampleRate: this.sampleRateHertz, latencyHint: 'interactive' });
    await context.audioWorklet.addModule(`data:text/javascript,${encodeURIComponent(this.programText)}`);
    this.node = new AudioWorkletNode(context, PLAYER, {
      numberOfInputs: 0,
      outputChannelCount: [1],
      processorOptions: { frames: this.frames },
    });
    this.node.port.onmessage = ({ data }: MessageEvent<MixerState>) => this.onState(data);
    this.volume = new GainNode(context, { gain: this.level });
    this.node.connect(this.volume).connect(context.destination);
    const { early } = this;
    this.early = [];
    for (const message of early) this.tell(message);
    await context.resume();
  }
}
