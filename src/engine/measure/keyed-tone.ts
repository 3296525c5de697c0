import { realSpectrum } from './spectrum.ts';

/** What a keyed tone sounds like. */
export interface KeyedTone {
  /** Rms while the key is down. */
  readonly voltsRms: number;
  /** From 10 to 90 % of the tone, mean over all marks, s; null where none was found whole. */
  readonly riseSeconds: number | null;
  /** Width about the pitch that holds 99 % of the tone's power, Hz. */
  readonly bandwidthHertz: number;
}

/** Share of the power that the bandwidth holds: the occupied bandwidth of ITU Radio Regulations no. 1.153 (from memory). */
const OCCUPIED = 0.99;

/** 10 to 90 % rise of the averaging that follows the outline, in periods of the pitch: a raised cosine over two of them. */
const OWN_RISE_PERIODS = 0.966;

/**
 * Measures a keyed tone in an output. Its outline is followed by mixing with the pitch and averaging over two periods of
 * it; the rise of that averaging is taken off as squares (1.2 ms at 800 Hz), which holds within a few percent.
 *
 * @param pitchHertz  above 0, below a quarter of the rate
 */
export function keyedTone(output: Float64Array, pitchHertz: number, rateHertz: number): KeyedTone {
  const outline = outlineOf(withoutThumps(output, rateHertz / pitchHertz), pitchHertz, rateHertz);
  let top = 0;
  for (const value of outline) top = Math.max(top, value);
  const down = outline.filter((value) => value > 0.5 * top).sort();
  const level = down[down.length >> 1] ?? 0;
  const rises: number[] = [];
  for (let n = 1; n < outline.length; n++) {
    if (!((outline[n - 1] as number) < 0.5 * level && (outline[n] as number) >= 0.5 * level)) continue;
    const low = crossing(outline, n, -1, 0.1 * level);
    const high = crossing(outline, n, 1, 0.9 * level);
    if (low !== null && high !== null) rises.push((high - low) / rateHertz);
  }
  const mean = rises.reduce((sum, value) => sum + value, 0) / Math.max(rises.length, 1);
  const own = OWN_RISE_PERIODS / pitchHertz;
  return {
    voltsRms: level / Math.SQRT2,
    riseSeconds: rises.length === 0 ? null : Math.sqrt(Math.max(0, mean * mean - own * own)),
    bandwidthHertz: occupiedHertz(output, pitchHertz, rateHertz),
  };
}

/** Less its mean over one period about each sample: a key that moves the plate current thumps louder than a weak tone. */
function withoutThumps(output: Float64Array, period: number): Float64Array {
  const reach = Math.floor(period / 2 + 0.5);
  return output.map((value, n) => {
    let sum = 0;
    for (let k = Math.max(-reach, -n); k <= Math.min(reach, output.length - 1 - n); k++) {
      // the outermost samples count by the part of them that lies within the period
      sum += Math.min(1, period / 2 + 0.5 - Math.abs(k)) * (output[n + k] as number);
    }
    return value - sum / period;
  });
}

/** Amplitude of what lies about the pitch: mixed down and averaged over two periods of it under a raised cosine. */
function outlineOf(output: Float64Array, pitchHertz: number, rateHertz: number): Float64Array {
  const half = Math.max(1, Math.round(rateHertz / pitchHertz));
  const window = Float64Array.from(
    { length: 2 * half + 1 },
    (_, k) => 1 + Math.cos((Math.PI * (k - half)) / (half + 1)),
  );
  const whole = window.reduce((sum, value) => sum + value, 0);
  const frames = output.length;
  const re = new Float64Array(frames);
  const im = new Float64Array(frames);
  for (let n = 0; n < frames; n++) {
    const angle = 2 * Math.PI * (((pitchHertz * n) / rateHertz) % 1);
    re[n] = 2 * (output[n] as number) * Math.cos(angle);
    im[n] = 2 * (output[n] as number) * Math.sin(angle);
  }
  return output.map((_, n) => {
    let a = 0;
    let b = 0;
    for (let k = Math.max(-half, -n); k <= Math.min(half, frames - 1 - n); k++) {
      const w = window[k + half] as number;
      a += w * (re[n + k] as number);
      b += w * (im[n + k] as number);
    }
    return Math.hypot(a, b) / whole;
  });
}

/** Where an outline passes a level on the way from `from`, in samples; null where it never does. */
function crossing(outline: Float64Array, from: number, step: 1 | -1, level: number): number | null {
  for (let n = from; n >= 1 && n < outline.length; n += step) {
    const before = outline[n - 1] as number;
    const now = outline[n] as number;
    if (before < level && now >= level) return n - (now - level) / (now - before);
  }
  return null;
}

/** Width about the pitch, half to one and a half times it at most, with the stated share of the power there. */
function occupiedHertz(output: Float64Array, pitchHertz: number, rateHertz: number): number {
  const length = 2 ** Math.ceil(Math.log2(Math.max(2, output.length)));
  const padded = new Float64Array(length);
  padded.set(output);
  const { real, imaginary } = realSpectrum(padded);
  const power = (bin: number): number => (real[bin] ?? 0) ** 2 + (imaginary[bin] ?? 0) ** 2;
  const middle = Math.round((pitchHertz / rateHertz) * length);
  const most = middle >> 1;
  let whole = power(middle);
  for (let k = 1; k <= most; k++) whole += power(middle - k) + power(middle + k);
  let held = power(middle);
  let k = 0;
  while (held < OCCUPIED * whole && k < most) {
    k++;
    held += power(middle - k) + power(middle + k);
  }
  return (2 * k * rateHertz) / length;
}
