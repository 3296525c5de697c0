import { besselI0 } from './finite-filter.ts';

/** What passes unchanged, and from where on nothing does; Hz. */
export interface Band {
  readonly passHertz: number;
  readonly stopHertz: number;
}

/** Attenuation above the stop edge, dB; the ripple of the pass band is as small. */
const STOP_DECIBELS = 100;
/** Kernel values to a sample of the source: the straight line between two of them is off by 2e-6, −114 dB. */
const FINENESS = 512;

/** All that fits both rates: flat to 0.45 of the lower one, nothing above its half. */
export function sharedBand(fromHertz: number, toHertz: number): Band {
  const lower = Math.min(fromHertz, toHertz);
  return { passHertz: 0.45 * lower, stopHertz: 0.5 * lower };
}

/** The narrower of two bands. */
export function narrower(a: Band, b: Band): Band {
  return a.stopHertz <= b.stopHertz ? a : b;
}

/**
 * A clip at another rate, in time with itself: linear phase, a sinc under a Kaiser window. Silence is assumed before and
 * after. A band that ends below half of both rates leaves nothing that could fold.
 *
 * @param fromHertz, toHertz  sample rates, in any ratio
 * @param band  what is kept; by default all that both rates hold
 * @returns `samples.length · toHertz / fromHertz` values, rounded
 * Source: J. F. Kaiser's window and length formulas, as in A. V. Oppenheim and R. W. Schafer, Discrete-Time Signal
 * Processing, 1989, section 7.4 (from memory).
 */
export function resampled(
  samples: Float64Array,
  fromHertz: number,
  toHertz: number,
  band: Band = sharedBand(fromHertz, toHertz),
): Float64Array {
  if (fromHertz === toHertz && band.stopHertz >= fromHertz / 2) return samples.slice();
  const width = (2 * Math.PI * (band.stopHertz - band.passHertz)) / fromHertz;
  const half = Math.ceil((STOP_DECIBELS - 7.95) / (2.285 * width) / 2);
  const kernel = kernelTable(half, (band.passHertz + band.stopHertz) / fromHertz);
  const output = new Float64Array(Math.round((samples.length * toHertz) / fromHertz));
  for (let n = 0; n < output.length; n++) {
    const at = (n * fromHertz) / toHertz;
    const first = Math.max(0, Math.ceil(at - half));
    const last = Math.min(samples.length - 1, Math.floor(at + half));
    let sum = 0;
    for (let k = first; k <= last; k++) {
      const place = Math.abs(at - k) * FINENESS;
      const below = Math.floor(place);
      const left = kernel[below] as number;
      sum += (left + (place - below) * ((kernel[below + 1] as number) - left)) * (samples[k] as number);
    }
    output[n] = sum;
  }
  return output;
}

/** One side of the kernel, from its middle; `cycles` is twice its corner over the source's rate. */
function kernelTable(half: number, cycles: number): Float64Array {
  const beta = 0.1102 * (STOP_DECIBELS - 8.7);
  const table = new Float64Array(half * FINENESS + 2);
  let sum = 0;
  for (let k = 0; k <= half * FINENESS; k++) {
    const t = k / FINENESS;
    const sinc = k === 0 ? cycles : Math.sin(Math.PI * cycles * t) / (Math.PI * t);
    table[k] = sinc * besselI0(beta * Math.sqrt(Math.max(0, 1 - (t / half) ** 2)));
    if (k % FINENESS === 0) sum += (k === 0 ? 1 : 2) * (table[k] as number);
  }
  return table.map((value) => value / sum);
}
