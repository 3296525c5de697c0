/** Harmonics of a periodic stretch. Index is the harmonic; index 0 is the mean, with phase 0. */
export interface Harmonics {
  /** Peak amplitudes, in the unit of the samples; index 0 is the mean with its sign. */
  readonly amplitudes: Float64Array;
  /** Phases φ of amplitude·cos(2π·n·cycles·t + φ), t from 0 to 1 over the stretch, radians. */
  readonly phases: Float64Array;
}

/**
 * Harmonics 0 to `highest` of a stretch of samples that holds a whole number of periods, each by one projection. No window
 * is needed and nothing leaks, because every harmonic fits the stretch a whole number of times; the angle of each
 * sample is reduced as an integer first, so long stretches lose no accuracy.
 *
 * @param samples  the stretch, at least two samples a period of the fundamental
 * @param cycles   periods of the fundamental in the stretch, a whole number, 1 or more
 * @param highest  harmonics wanted; those at or above half of the sample rate come back as 0
 * @throws RangeError when `cycles` is no whole number or has fewer than two samples a period
 */
export function harmonics(samples: Float64Array, cycles: number, highest: number): Harmonics {
  const n = samples.length;
  if (!Number.isInteger(cycles) || cycles < 1 || 2 * cycles >= n) {
    throw new RangeError(
      `harmonics: ${cycles} cycles in ${n} samples; a whole number from 1 and more than two samples each`,
    );
  }
  const cosine = Float64Array.from({ length: n }, (_, k) => Math.cos((2 * Math.PI * k) / n));
  const sine = Float64Array.from({ length: n }, (_, k) => Math.sin((2 * Math.PI * k) / n));
  const amplitudes = new Float64Array(highest + 1);
  const phases = new Float64Array(highest + 1);
  let sum = 0;
  for (const sample of samples) sum += sample;
  amplitudes[0] = sum / n;
  for (let h = 1; h <= highest; h++) {
    const step = h * cycles;
    if (2 * step >= n) break;
    let real = 0;
    let imaginary = 0;
    for (let k = 0, angle = 0; k < n; k++) {
      real += samples[k]! * cosine[angle]!;
      imaginary -= samples[k]! * sine[angle]!;
      angle += step;
      if (angle >= n) angle -= n;
    }
    amplitudes[h] = (2 / n) * Math.hypot(real, imaginary);
    phases[h] = Math.atan2(imaginary, real);
  }
  return { amplitudes, phases };
}

/**
 * Total harmonic distortion referred to the fundamental (IEC 62257-1 glossary, seen): root of the sum of squares of
 * harmonics `from` to `to` over the fundamental; a fraction, not percent.
 *
 * @param amplitudes  by harmonic, index 0 the mean; harmonics beyond its end count as 0
 * @returns null when there is no fundamental
 */
export function totalHarmonicDistortion(amplitudes: Float64Array, from = 2, to = 10): number | null {
  const fundamental = amplitudes[1] ?? 0;
  if (!(fundamental > 0)) return null;
  let sum = 0;
  for (let h = from; h <= Math.min(to, amplitudes.length - 1); h++) sum += amplitudes[h]! ** 2;
  return Math.sqrt(sum) / fundamental;
}
