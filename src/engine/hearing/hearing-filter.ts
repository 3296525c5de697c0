import FFT from 'fft.js';
import { curveDecibels, type HearingCurve } from './hearing-curves.ts';

/** Frequency to which curves are referred, Hz: what is heard through keeps the level there. */
const REFERENCE_HERTZ = 400;
/**
 * Ringing that is kept, s. The sharpest known curve has died away by 60 dB after a quarter of it; the rest is for curves
 * by points, whose bends ring longer: one of 20 dB in an octave and a half at 100 Hz is then met within 0.06 dB.
 */
const RINGING_SECONDS = 0.16;

/**
 * A clip heard through a curve, minimum phase, level kept at 400 Hz: a new array of the same length, in time with it.
 *
 * The curve's logarithm gives the cepstrum, folded onto positive times it gives the minimum-phase filter (A. V.
 * Oppenheim and R. W. Schafer, Discrete-Time Signal Processing, 1989, chapter 12, from memory); convolution by blocks.
 */
export function heardThrough(samples: Float64Array, curve: HearingCurve, sampleRateHertz: number): Float64Array {
  if (curve.sections.length === 0 && curve.points === null) return samples;
  const taps = minimumPhaseTaps(curve, sampleRateHertz);
  return convolve(samples, taps);
}

/** The filter's taps; their number is a power of two. */
export function minimumPhaseTaps(curve: HearingCurve, sampleRateHertz: number): Float64Array {
  const length = 2 ** Math.ceil(Math.log2(RINGING_SECONDS * sampleRateHertz));
  const size = 8 * length;
  const fft = new FFT(size);
  const reference = curveDecibels(curve, REFERENCE_HERTZ);
  const spectrum = fft.createComplexArray();
  for (let k = 0; k <= size / 2; k++) {
    const hertz = Math.max(k, 0.25) * (sampleRateHertz / size);
    const logarithm = ((curveDecibels(curve, hertz) - reference) * Math.LN10) / 20;
    spectrum[2 * k] = logarithm;
    if (k > 0) spectrum[2 * (size - k)] = logarithm;
  }
  const cepstrum = fft.createComplexArray();
  fft.inverseTransform(cepstrum, spectrum);
  for (let n = 0; n < size; n++) {
    const fold = n === 0 || n === size / 2 ? 1 : n < size / 2 ? 2 : 0;
    cepstrum[2 * n] = fold * (cepstrum[2 * n] as number);
    cepstrum[2 * n + 1] = 0;
  }
  fft.transform(spectrum, cepstrum);
  for (let k = 0; k < size; k++) {
    const size2 = Math.exp(spectrum[2 * k] as number);
    const angle = spectrum[2 * k + 1] as number;
    spectrum[2 * k] = size2 * Math.cos(angle);
    spectrum[2 * k + 1] = size2 * Math.sin(angle);
  }
  fft.inverseTransform(cepstrum, spectrum);
  return Float64Array.from({ length }, (_, n) => {
    // the last quarter is faded, so that the cut leaves no step
    const fade = n < 0.75 * length ? 1 : 0.5 * (1 + Math.cos((Math.PI * (n / length - 0.75)) / 0.25));
    return fade * (cepstrum[2 * n] as number);
  });
}

/** Convolution by overlapping blocks, two blocks to a transform: one as its real, one as its imaginary part. */
function convolve(samples: Float64Array, taps: Float64Array): Float64Array {
  const size = 4 * taps.length;
  const step = size - taps.length + 1;
  const fft = new FFT(size);
  const filter = fft.createComplexArray();
  const block = fft.createComplexArray();
  const product = fft.createComplexArray();
  taps.forEach((tap, n) => {
    block[2 * n] = tap;
  });
  fft.transform(filter, block);
  const output = new Float64Array(samples.length);
  for (let from = 0; from < samples.length; from += 2 * step) {
    block.fill(0);
    for (let n = 0; n < step; n++) {
      block[2 * n] = samples[from + n] ?? 0;
      block[2 * n + 1] = samples[from + step + n] ?? 0;
    }
    fft.transform(product, block);
    for (let k = 0; k < size; k++) {
      const [re, im] = [product[2 * k] as number, product[2 * k + 1] as number];
      const [fr, fi] = [filter[2 * k] as number, filter[2 * k + 1] as number];
      product[2 * k] = re * fr - im * fi;
      product[2 * k + 1] = re * fi + im * fr;
    }
    fft.inverseTransform(block, product);
    for (let n = 0; n < size; n++) {
      const first = from + n;
      if (first < output.length) output[first] = (output[first] as number) + (block[2 * n] as number);
      const second = first + step;
      if (second < output.length) output[second] = (output[second] as number) + (block[2 * n + 1] as number);
    }
  }
  return output;
}
