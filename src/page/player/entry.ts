import { PLAYER, type ToPlayer } from './messages.ts';
import { Mixer, type MixerState } from './mixer.ts';

/** The part of an audio thread's global scope that the player needs. */
interface AudioScope {
  readonly sampleRate: number;
  readonly AudioWorkletProcessor: new () => { readonly port: Port };
  registerProcessor(name: string, processor: new (options: { processorOptions: { frames: number } }) => object): void;
}

interface Port {
  onmessage: ((event: { readonly data: ToPlayer }) => void) | null;
  postMessage(state: MixerState): void;
}

/** Blocks between two reports of the position: about 30 a second at 48 kHz. */
const REPORT_BLOCKS = 12;

const scope = globalThis as unknown as AudioScope;

class PlayerProcessor extends scope.AudioWorkletProcessor {
  private readonly mixer: Mixer;
  private blocks = 0;

  constructor(options: { processorOptions: { frames: number } }) {
    super();
    this.mixer = new Mixer(scope.sampleRate, options.processorOptions.frames);
    this.port.onmessage = ({ data }) => this.obey(data);
  }

  private obey(message: ToPlayer): void {
    const { mixer } = this;
    if (message.kind === 'load') mixer.load(message.name, message.from, message.length, message.gain);
    else if (message.kind === 'fill') mixer.fill(message.name, message.samples);
    else if (message.kind === 'drop') mixer.drop(message.name);
    else if (message.kind === 'level') mixer.setLevel(message.name, message.gain);
    else if (message.kind === 'select') mixer.select(message.name);
    else if (message.kind === 'play') mixer.play();
    else if (message.kind === 'pause') mixer.pause();
    else if (message.kind === 'seek') mixer.seek(message.position);
    else mixer.setLoop(message.loop);
  }

  process(_inputs: unknown, outputs: readonly (readonly Float32Array[])[]): boolean {
    const output = outputs[0]?.[0];
    if (!output) return true;
    const before = this.mixer.state.playing;
    this.mixer.process(output);
    const { state } = this.mixer;
    this.blocks++;
    if (this.blocks >= REPORT_BLOCKS || before !== state.playing) {
      this.blocks = 0;
      this.port.postMessage(state);
    }
    return true;
  }
}

scope.registerProcessor(PLAYER, PlayerProcessor);
