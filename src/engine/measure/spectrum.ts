import FFT from 'fft.js';

/** Half spectrum of real samples, bins 0 to N/2: Σ x[k]·exp(−2πi·bin·k/N), not scaled. */
export interface HalfSpectrum {
  readonly real: Float64Array;
  readonly imaginary: Float64Array;
}

/** What is used of the transform library, which ships without types of its own. */
interface Transform {
  realTransform(out: Float64Array, data: Float64Array): void;
}

/**
 * Discrete Fourier transform of real samples.
 *
 * @param samples  a power of two of them, 2 or more; not changed
 * @throws RangeError for another length
 */
export function realSpectrum(samples: Float64Array): HalfSpectrum {
  const n = samples.length;
  if (n < 2 || (n & (n - 1)) !== 0) throw new RangeError(`realSpectrum: ${n} samples; a power of two from 2`);
  const bins = n / 2 + 1;
  // the library takes 4 and up; two samples are their sum and difference
  if (n === 2) {
    return {
      real: Float64Array.of(samples[0]! + samples[1]!, samples[0]! - samples[1]!),
      imaginary: new Float64Array(2),
    };
  }
  const interleaved = new Float64Array(2 * n);
  (new FFT(n) as unknown as Transform).realTransform(interleaved, samples);
  return {
    real: Float64Array.from({ length: bins }, (_, k) => interleaved[2 * k]!),
    imaginary: Float64Array.from({ length: bins }, (_, k) => interleaved[2 * k + 1]!),
  };
}

/**
 * Peak amplitude in each bin of a stretch that holds whole periods: a sine that fits its bin reads its own peak, bin 0 reads
 * the magnitude of the mean. Unit of the samples. Same length rule and error as `realSpectrum`.
 */
export function binAmplitudes(samples: Float64Array): Float64Array {
  const { real, imaginary } = realSpectrum(samples);
  const n = samples.length;
  return real.map((re, k) => (Math.hypot(re, imaginary[k]!) * (k === 0 || k === n / 2 ? 1 : 2)) / n);
}
