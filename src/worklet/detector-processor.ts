import type { DetectorCircuit } from '../engine/circuits/circuit.ts';
import { restPoint } from '../engine/circuits/rest-point.ts';
import { DetectorRenderer, type Quality } from '../engine/renderer/detector-renderer.ts';
import { TableStore } from '../engine/renderer/table-store.ts';

/** Name under which the processor is registered. */
export const DETECTOR_PROCESSOR = 'presolder-detector';

/** What the node that owns the processor hands over as `processorOptions`. */
export interface DetectorProcessorOptions {
  readonly circuit: DetectorCircuit;
  /** Largest modulation the input will carry, 0 and up. */
  readonly modulation: number;
  /** Volts at the output that become sample value 1. */
  readonly fullScaleVolts: number;
  readonly quality?: Quality;
}

/** The part of an audio thread's global scope that the processor needs; the same in a browser and in Node. */
export interface WorkletScope {
  readonly sampleRate: number;
  readonly AudioWorkletProcessor: new () => object;
  registerProcessor(
    name: string,
    processor: new (options: { processorOptions: DetectorProcessorOptions }) => object,
  ): void;
}

/**
 * Registers the detector as an audio-thread processor: input is the modulation m·p of one channel, output is the
 * detector's voltage over `fullScaleVolts`, `delaySamples` later. A missing input counts as silence, so that the
 * coupling capacitor's tail is heard to its end.
 *
 * @param onFault  told the first error; an audio graph itself would only fall silent
 */
export function registerDetector(scope: WorkletScope, onFault: (fault: unknown) => void = () => {}): void {
  class DetectorProcessor extends scope.AudioWorkletProcessor {
    private readonly renderer: DetectorRenderer | null;
    private readonly scale: number;
    private silence = new Float32Array(128);
    private volts = new Float64Array(128);

    constructor(options: { processorOptions: DetectorProcessorOptions }) {
      super();
      const { circuit, modulation, fullScaleVolts, quality } = options.processorOptions;
      this.scale = 1 / fullScaleVolts;
      this.renderer = this.make(circuit, modulation, scope.sampleRate, quality ?? 'normal');
    }

    private make(
      circuit: DetectorCircuit,
      modulation: number,
      rate: number,
      quality: Quality,
    ): DetectorRenderer | null {
      try {
        const rest = restPoint(circuit);
        return new DetectorRenderer(rest, new TableStore().lawsFor(rest, modulation), rate, quality);
      } catch (fault) {
        onFault(fault);
        return null;
      }
    }

    process(inputs: readonly (readonly Float32Array[])[], outputs: readonly (readonly Float32Array[])[]): boolean {
      const output = outputs[0]?.[0];
      if (!output || !this.renderer) return this.renderer !== null;
      const frames = output.length;
      if (frames > this.silence.length) {
        this.silence = new Float32Array(frames);
        this.volts = new Float64Array(frames);
      }
      const input = inputs[0]?.[0] ?? this.silence;
      this.renderer.process(input, this.volts, frames);
      for (let n = 0; n < frames; n++) output[n] = (this.volts[n] as number) * this.scale;
      return true;
    }
  }
  scope.registerProcessor(DETECTOR_PROCESSOR, DetectorProcessor);
}
