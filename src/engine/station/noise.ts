import { exponentialNumber, normalPair } from '../chance/normal-numbers.ts';
import { SeededNumbers } from '../chance/seeded-numbers.ts';
import type { Envelope } from './envelope.ts';

/** Noise that is always there. */
export interface Noise {
  /** V rms in the stated band, where the station's level is counted. */
  readonly levelVoltsRms: number;
  /** Two-sided: 10 kHz is 5 kHz to either side of the carrier. */
  readonly bandHertz: number;
}

/** Static: crashes that come by chance and die away. */
export interface Static extends Noise {
  /** Mean number of crashes a second. */
  readonly crashesPerSecond: number;
  /** Time in which a crash falls to 1/e, s. */
  readonly decaySeconds: number;
}

/** Streams of one seed: noise and static are the same whether the other is there or not. */
const NOISE_STREAM = 0;
const CRASH_STREAM = 1;

/**
 * Standard deviation of each part of an envelope of noise re the wanted carrier.
 *
 * Noise of V rms in a band B about the carrier has an envelope n of mean square 2·V² (peak volts), over the carrier's
 * peak squared, 2·Vc²: (V/Vc)². It is evenly spread, so all of the sample rate holds `rate/B` times as much, half of it
 * in each part.
 */
function deviation({ levelVoltsRms, bandHertz }: Noise, wantedVoltsRms: number, rateHertz: number): number {
  return (levelVoltsRms / wantedVoltsRms) * Math.sqrt(rateHertz / (2 * bandHertz));
}

/**
 * Adds Gaussian noise, even over all that the sample rate holds: the tuned circuit makes its own band of it. The same
 * seed gives the same noise.
 */
export function addNoise(
  { modulation, quadrature }: Envelope,
  noise: Noise,
  wantedVoltsRms: number,
  rateHertz: number,
  seed: number,
): void {
  const numbers = SeededNumbers.ofRun(seed, NOISE_STREAM);
  const size = deviation(noise, wantedVoltsRms, rateHertz);
  const pair = new Float64Array(2);
  for (let n = 0; n < modulation.length; n++) {
    normalPair(numbers, pair);
    modulation[n] = (modulation[n] as number) + size * (pair[0] as number);
    quadrature[n] = (quadrature[n] as number) + size * (pair[1] as number);
  }
}

/** A crash: when it begins, s, and its size re the stated level. */
export interface Crash {
  readonly seconds: number;
  readonly size: number;
}

/** Instants and sizes of the crashes in a stretch: waits and sizes both exponential, so that a few tower over the rest. */
export function crashes(crashesPerSecond: number, seconds: number, seed: number): Crash[] {
  const numbers = SeededNumbers.ofRun(seed, CRASH_STREAM);
  const found: Crash[] = [];
  if (!(crashesPerSecond > 0)) return found;
  for (;;) {
    const last = found.at(-1)?.seconds ?? 0;
    const next = last + exponentialNumber(numbers) / crashesPerSecond;
    const size = exponentialNumber(numbers);
    if (next >= seconds) return found;
    found.push({ seconds: next, size });
  }
}

/** A crash is followed until it is down by 80 dB, in decay times. */
const HEARD_DECAYS = 4 * Math.LN10;

/** Adds static: each crash is noise of its own whose rms falls exponentially from `size` times the level. */
export function addStatic(
  { modulation, quadrature }: Envelope,
  statics: Static,
  wantedVoltsRms: number,
  rateHertz: number,
  seed: number,
): void {
  const frames = modulation.length;
  const { decaySeconds, crashesPerSecond } = statics;
  const whole = deviation(statics, wantedVoltsRms, rateHertz);
  const pair = new Float64Array(2);
  crashes(crashesPerSecond, frames / rateHertz, seed).forEach(({ seconds, size }, k) => {
    const numbers = SeededNumbers.ofRun(seed, CRASH_STREAM + 1 + k);
    const first = Math.ceil(seconds * rateHertz);
    const last = Math.min(frames - 1, first + Math.ceil(HEARD_DECAYS * decaySeconds * rateHertz));
    for (let n = first; n <= last; n++) {
      normalPair(numbers, pair);
      const now = whole * size * Math.exp(-(n / rateHertz - seconds) / decaySeconds);
      modulation[n] = (modulation[n] as number) + now * (pair[0] as number);
      quadrature[n] = (quadrature[n] as number) + now * (pair[1] as number);
    }
  });
}
