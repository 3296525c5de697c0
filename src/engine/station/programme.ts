import { InputError } from '../errors.ts';

/** A clip made into modulation: s(t) = 1 + modulation[n]. */
export interface Programme {
  /** m·p(t), −1 and up; same length as the clip. */
  readonly modulation: Float64Array;
  /** Samples that the transmitter's limiter held at −100 %. */
  readonly limitedSamples: number;
}

/**
 * Brings the clip's largest magnitude to the stated depth; the limiter keeps negative peaks at −100 % (it acts only
 * above full modulation). Silence stays silence.
 *
 * @param samples  programme after pre-emphasis and band limit, any scale
 * @param depth    peak modulation depth, 0 to 2
 * @param into     takes the modulation: as long as the samples, which it may be itself
 * Raises InputError `not-finite` for a sample that is no number.
 */
export function programmeFrom(
  samples: Float64Array,
  depth: number,
  into: Float64Array = new Float64Array(samples.length),
): Programme {
  let largest = 0;
  for (let n = 0; n < samples.length; n++) {
    const size = Math.abs(samples[n] as number);
    if (!(size <= Number.MAX_VALUE)) {
      throw new InputError({
        code: 'not-finite',
        where: `clip, sample ${n}`,
        got: 'no number',
        expected: 'finite samples',
      });
    }
    if (size > largest) largest = size;
  }
  const gain = largest > 0 ? depth / largest : 0;
  const modulation = into;
  let limitedSamples = 0;
  for (let n = 0; n < samples.length; n++) {
    const value = (samples[n] as number) * gain;
    // the peak itself at full depth may pass −1 by a rounding; that is not limiting
    if (value < -1 - 1e-12) limitedSamples++;
    modulation[n] = value < -1 ? -1 : value;
  }
  return { modulation, limitedSamples };
}

/** Sums two sides to mono, 0.5·(L + R), or takes the side asked for. */
export function toMono(channels: readonly Float64Array[], side: 'both' | 'left' | 'right'): Float64Array {
  const left = channels[0] ?? new Float64Array(0);
  const right = channels[1] ?? left;
  if (side === 'left' || channels.length < 2) return left.slice();
  if (side === 'right') return right.slice();
  return left.map((value, n) => 0.5 * (value + (right[n] as number)));
}
