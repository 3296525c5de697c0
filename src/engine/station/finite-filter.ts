/** A filter of finite length with the delay (samples) that has to be taken off to keep its output in time with its input. */
export interface FiniteFilter {
  readonly taps: Float64Array;
  readonly delay: number;
}

/** Modified Bessel function I0 by its power series; 1e-16 for the arguments of a window (below 20). */
export function besselI0(x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; term > 1e-17 * sum; k++) {
    term *= (x / (2 * k)) ** 2;
    sum += term;
  }
  return sum;
}

/**
 * Linear-phase low-pass: a sinc under a Kaiser window, half-way down (−6 dB) in the middle between the two edges, unity at DC.
 *
 * @param passHertz    flat below this
 * @param stopHertz    down by `attenuationDecibels` above this; passHertz < stopHertz, their middle below half of the rate
 * @param attenuationDecibels  50 to 120; the ripple of the pass band is as small
 * Source: J. F. Kaiser's window and length formulas, as in A. V. Oppenheim and R. W. Schafer, Discrete-Time Signal Processing,
 * 1989, section 7.4 (from memory).
 */
export function linearPhaseLowPass(
  passHertz: number,
  stopHertz: number,
  attenuationDecibels: number,
  sampleRateHertz: number,
): FiniteFilter {
  const width = (2 * Math.PI * (stopHertz - passHertz)) / sampleRateHertz;
  const delay = Math.ceil((attenuationDecibels - 7.95) / (2.285 * width) / 2);
  const beta = 0.1102 * (attenuationDecibels - 8.7);
  const cycles = (passHertz + stopHertz) / sampleRateHertz;
  const taps = new Float64Array(2 * delay + 1);
  let sum = 0;
  for (let k = 0; k <= 2 * delay; k++) {
    const t = k - delay;
    const sinc = t === 0 ? cycles : Math.sin(Math.PI * cycles * t) / (Math.PI * t);
    taps[k] = sinc * besselI0(beta * Math.sqrt(Math.max(0, 1 - (t / delay) ** 2)));
    sum += taps[k]!;
  }
  return { taps: taps.map((tap) => tap / sum), delay };
}

/** Points of the frequency axis on which a minimum-phase filter is drawn up; its aliasing falls with the square. */
const CEPSTRUM_POINTS = 512;

/**
 * Minimum-phase filter of `length` taps with a given magnitude from 0 to half of the sample rate. It has no delay to take
 * off: like the network it stands for, it acts at once.
 *
 * The logarithm of the magnitude has a cosine series; doubled on one side it is that of the causal filter, whose taps
 * follow by h[n] = Σ (k/n)·c[k]·h[n−k] (A. V. Oppenheim and R. W. Schafer, Discrete-Time Signal Processing, 1989, chapter 12,
 * from memory).
 *
 * @param magnitude  of a frequency in Hz, above 0
 */
export function minimumPhaseFilter(
  magnitude: (hertz: number) => number,
  length: number,
  sampleRateHertz: number,
): FiniteFilter {
  const m = CEPSTRUM_POINTS;
  const logarithm = Float64Array.from({ length: m + 1 }, (_, k) =>
    Math.log(magnitude((k * sampleRateHertz) / (2 * m))),
  );
  const cepstrum = Float64Array.from({ length }, (_, n) => {
    let sum = 0.5 * (logarithm[0]! + logarithm[m]! * (n % 2 === 0 ? 1 : -1));
    for (let k = 1; k < m; k++) sum += logarithm[k]! * Math.cos((Math.PI * ((n * k) % (2 * m))) / m);
    return ((n === 0 ? 1 : 2) * sum) / m;
  });
  const taps = new Float64Array(length);
  taps[0] = Math.exp(cepstrum[0]!);
  for (let n = 1; n < length; n++) {
    let sum = 0;
    for (let k = 1; k <= n; k++) sum += k * cepstrum[k]! * taps[n - k]!;
    taps[n] = sum / n;
  }
  return { taps, delay: 0 };
}

/** A new array of the same length, filtered, in time with the input; silence is assumed before and after. */
export function filterAligned(samples: Float64Array, { taps, delay }: FiniteFilter): Float64Array {
  const frames = samples.length;
  const output = new Float64Array(frames);
  for (let n = 0; n < frames; n++) {
    const newest = n + delay;
    const first = Math.max(0, newest - (frames - 1));
    const last = Math.min(taps.length - 1, newest);
    let sum = 0;
    for (let k = first; k <= last; k++) sum += taps[k]! * samples[newest - k]!;
    output[n] = sum;
  }
  return output;
}
