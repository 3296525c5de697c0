import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { type RestPoint, restPoint } from '../../src/engine/circuits/rest-point.ts';
import { harmonics } from '../../src/engine/measure/harmonics.ts';
import { DetectorRenderer, type Quality } from '../../src/engine/renderer/detector-renderer.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';

/** Every tone here fits this stretch a whole number of times, s. */
export const STRETCH_SECONDS = 0.04;

/** A renderer of one circuit that measures steady tones, its tables made once. */
export class ToneBench {
  readonly rest: RestPoint;
  readonly renderer: DetectorRenderer;
  private readonly rateHertz: number;

  /** @param depth  largest modulation that will be rendered */
  constructor(circuit: DetectorCircuit, depth: number, rateHertz = 48_000, quality: Quality = 'normal') {
    this.rest = restPoint(circuit);
    this.rateHertz = rateHertz;
    this.renderer = new DetectorRenderer(this.rest, new TableStore().lawsFor(this.rest, depth), rateHertz, quality);
  }

  /**
   * Peak volts of harmonics 0 to 3 of the rendered output once the tone is steady.
   *
   * @param hertz          a multiple of 25 Hz
   * @param settleSeconds  left out before measuring
   */
  harmonicVolts(hertz: number, depth: number, settleSeconds: number): Float64Array {
    const skipped = Math.round(settleSeconds * this.rateHertz);
    const length = Math.round(STRETCH_SECONDS * this.rateHertz);
    const input = Float64Array.from({ length: skipped + length }, (_, n) => {
      return depth * Math.sin((2 * Math.PI * hertz * n) / this.rateHertz);
    });
    const output = new Float64Array(input.length);
    this.renderer.reset();
    this.renderer.process(input, output, input.length);
    return harmonics(output.subarray(skipped), Math.round(hertz * STRETCH_SECONDS), 3).amplitudes;
  }
}
