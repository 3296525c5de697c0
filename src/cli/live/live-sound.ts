import { Writable } from 'node:stream';
import { InputError } from '../../engine/errors.ts';
import type { LivePlayer } from './live-player.ts';

/** Takes 16-bit samples, two channels side by side; calls back when it wants more. */
export type SoundSink = (bytes: Uint8Array, done: () => void) => void;

export interface LiveSound {
  stop(): Promise<void>;
}

/** Bytes that may wait for the sink, about 20 ms at 48 kHz: a key is heard soon. */
const WAITING_BYTES = 4096;

/**
 * Plays what the player makes through the web audio package's context, into a sink that sets the pace.
 *
 * @param onFault  told what the player throws: an audio graph itself would only fall silent
 */
export async function openSound(
  player: LivePlayer,
  rateHertz: number,
  sink: SoundSink,
  onFault: (error: unknown) => void,
): Promise<LiveSound> {
  const audio = await import('web-audio-api');
  const stream = new Writable({
    highWaterMark: WAITING_BYTES,
    write: (bytes: Uint8Array, _encoding, done) => sink(bytes, () => done()),
  });
  const context = new audio.AudioContext({ sampleRate: rateHertz, sinkId: stream, numberOfChannels: 2, bitDepth: 16 });
  await context.audioWorklet.addModule((scope) => {
    class Live extends scope.AudioWorkletProcessor {
      process(_inputs: unknown, outputs: Float32Array[][]): boolean {
        const output = outputs[0]?.[0];
        if (!output) return true;
        try {
          player.process(output, output.length);
          outputs[0]?.[1]?.set(output);
        } catch (error) {
          output.fill(0);
          onFault(error);
        }
        return true;
      }
    }
    scope.registerProcessor('presolder-live', Live);
  });
  // the package's types leave the constructor out
  const Node = audio.AudioWorkletNode as unknown as new (
    context: unknown,
    name: string,
    options: { readonly numberOfInputs: number; readonly outputChannelCount: number[] },
  ) => { connect(to: unknown): void; disconnect(): void };
  const node = new Node(context, 'presolder-live', { numberOfInputs: 0, outputChannelCount: [2] });
  node.connect(context.destination);
  await context.resume();
  return {
    async stop() {
      node.disconnect();
      await context.close();
    },
  };
}

/** The computer's own sound output, by an optional native package. Throws InputError where there is none. */
export async function soundOutput(rateHertz: number): Promise<{ sink: SoundSink; close(): void }> {
  const refuse = (got: string, hint: string): InputError =>
    new InputError({
      code: 'no-sound-output',
      where: 'listen',
      got,
      expected: 'a sound output',
      hint: `${hint}; presolder render writes files to play instead`,
    });
  if (process.platform === 'linux') {
    const { existsSync } = await import('node:fs');
    if (!existsSync('/dev/snd') && !process.env.PULSE_SERVER && !existsSync('/run/user')) {
      throw refuse('no sound device on this computer', 'connect one');
    }
  }
  // named in pieces, so that no bundle tries to carry native code
  const name = ['@audio', 'speaker'].join('/');
  let open: (options: object) => ((bytes: Uint8Array, done: () => void) => void) & { close(): void };
  try {
    ({ default: open } = (await import(name)) as { default: typeof open });
  } catch {
    throw refuse(`no ${name} package`, `install it beside presolder (npm install ${name})`);
  }
  try {
    const write = open({ sampleRate: rateHertz, channels: 2, bitDepth: 16 });
    return { sink: (bytes, done) => write(bytes, done), close: () => write.close() };
  } catch (error) {
    throw refuse(
      `a sound output that does not open (${error instanceof Error ? error.message : String(error)})`,
      'check it',
    );
  }
}
