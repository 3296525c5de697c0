import { describe, expect, it } from 'vitest';
import { AudioWorkletNode, OfflineAudioContext } from 'web-audio-api';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { DetectorRenderer } from '../../src/engine/renderer/detector-renderer.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import {
  DETECTOR_PROCESSOR,
  type DetectorProcessorOptions,
  registerDetector,
  type WorkletScope,
} from '../../src/worklet/detector-processor.ts';
import { gridLeak } from './grid-leak-circuit.ts';
import { seededNumbers } from './seeded-numbers.ts';

const RATE = 48_000;
const FULL_SCALE_VOLTS = 4;

/** The package's types leave the constructor out. */
const WorkletNode = AudioWorkletNode as unknown as new (
  context: OfflineAudioContext,
  name: string,
  options: { processorOptions: DetectorProcessorOptions },
) => AudioWorkletNode;

/** Modulation of two tones and noise within 80 %. */
function programme(frames: number): Float32Array {
  const random = seededNumbers(5);
  return Float32Array.from(
    { length: frames },
    (_, n) => 0.4 * Math.sin(0.03 * n) + 0.2 * Math.sin(0.4 * n) + 0.2 * (2 * random() - 1),
  );
}

/** The programme through the processor in an audio graph, then silence up to `frames`. */
async function throughGraph(input: Float32Array, frames: number, options: DetectorProcessorOptions) {
  const context = new OfflineAudioContext(1, frames, RATE);
  const faults: unknown[] = [];
  await context.audioWorklet.addModule((scope: unknown) => {
    registerDetector(scope as WorkletScope, (fault) => faults.push(fault));
  });
  const buffer = context.createBuffer(1, input.length, RATE);
  buffer.copyToChannel(input, 0);
  const source = context.createBufferSource();
  source.buffer = buffer;
  const node = new WorkletNode(context, DETECTOR_PROCESSOR, { processorOptions: options });
  source.connect(node);
  node.connect(context.destination);
  source.start();
  const rendered = await context.startRendering();
  return { samples: rendered.getChannelData(0), faults };
}

/** The same by the renderer alone, as 32-bit samples of the full scale. */
function direct(input: Float32Array, frames: number, options: DetectorProcessorOptions): Float32Array {
  const rest = restPoint(options.circuit);
  const laws = new TableStore().lawsFor(rest, options.modulation);
  const renderer = new DetectorRenderer(rest, laws, RATE, options.quality);
  const padded = new Float64Array(frames);
  padded.set(input);
  const volts = new Float64Array(frames);
  renderer.process(padded, volts, frames);
  return Float32Array.from(volts, (value) => value * (1 / options.fullScaleVolts));
}

describe('the detector as an audio-thread processor', () => {
  // the processor gets 32-bit samples, computes in 64 bits and gives 32-bit samples back: no tolerance is needed
  it.each<[string, number, DetectorProcessorOptions]>([
    ['whole blocks', 9600, { circuit: gridLeak(), modulation: 0.8, fullScaleVolts: FULL_SCALE_VOLTS }],
    [
      'a programme that ends inside a block, fine steps',
      4001,
      {
        circuit: gridLeak({ tube: '12AU7', levelVoltsRms: 1 }),
        modulation: 0.8,
        fullScaleVolts: FULL_SCALE_VOLTS,
        quality: 'fine',
      },
    ],
  ])('gives the renderer’s own samples, and the tail after the source has ended: %s', async (_, length, options) => {
    const input = programme(length);
    const frames = length + 3000;
    const { samples, faults } = await throughGraph(input, frames, options);
    expect(faults).toEqual([]);
    const wanted = direct(input, frames, options);
    expect(samples.length).toBe(frames);
    expect(samples).toEqual(wanted);
    const tail = wanted.subarray(length + 500);
    expect(tail.some((sample) => Math.abs(sample) > 1e-6)).toBe(true);
  });

  it('tells what is wrong with a circuit, because the graph itself would only fall silent', async () => {
    const circuit = gridLeak();
    const broken = { ...circuit, tube: { ...circuit.tube, law: { ...circuit.tube.law, mu: Number.NaN } } };
    const { samples, faults } = await throughGraph(programme(256), 256, {
      circuit: broken,
      modulation: 0.8,
      fullScaleVolts: FULL_SCALE_VOLTS,
    });
    expect(faults).toHaveLength(1);
    expect(samples.every((sample) => sample === 0)).toBe(true);
  });
});
