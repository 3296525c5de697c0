/** An output taken apart into what a reference accounts for and the rest. */
export interface Apart {
  /** The part that is the reference, times this. */
  readonly gain: number;
  readonly wantedVoltsRms: number;
  readonly restVoltsRms: number;
  /** Output less gain · reference. */
  readonly rest: Float64Array;
}

/**
 * Takes an output apart by projection on what the wanted signal alone gives: the gain that leaves least of it in the
 * rest. What chance has in common between the two makes the gain uncertain by about 1/√(2·bandwidth·time).
 *
 * @param output, reference  of one length, without a steady voltage
 */
export function takenApart(output: Float64Array, reference: Float64Array): Apart {
  let common = 0;
  let own = 0;
  for (let n = 0; n < reference.length; n++) {
    common += (output[n] as number) * (reference[n] as number);
    own += (reference[n] as number) ** 2;
  }
  const gain = own > 0 ? common / own : 0;
  const rest = output.map((value, n) => value - gain * (reference[n] as number));
  return {
    gain,
    wantedVoltsRms: Math.abs(gain) * Math.sqrt(own / Math.max(reference.length, 1)),
    restVoltsRms: rootMeanSquare(rest),
    rest,
  };
}

/** Root of the mean of squares; 0 of nothing. */
export function rootMeanSquare(samples: Float64Array): number {
  let sum = 0;
  for (const value of samples) sum += value * value;
  return Math.sqrt(sum / Math.max(samples.length, 1));
}

/**
 * Rms of a steady tone at a known frequency in a long stretch, under a raised-cosine window: what lies a few times
 * 1/length away does not count.
 */
export function steadyToneRms(samples: Float64Array, hertz: number, rateHertz: number): number {
  const { length } = samples;
  let re = 0;
  let im = 0;
  let whole = 0;
  for (let n = 0; n < length; n++) {
    const window = 1 - Math.cos((2 * Math.PI * (n + 0.5)) / length);
    const angle = 2 * Math.PI * (((hertz * n) / rateHertz) % 1);
    re += window * (samples[n] as number) * Math.cos(angle);
    im += window * (samples[n] as number) * Math.sin(angle);
    whole += window;
  }
  return whole > 0 ? (Math.SQRT2 * Math.hypot(re, im)) / whole : 0;
}
