import wavEncoder from 'wav-encoder';
import { InputError } from '../engine/errors.ts';
import { onePlainLine } from './plain-line.ts';

/** Coding of a written file: 16- or 24-bit integer, or 32-bit float. */
export type WavCoding = '16' | '24' | '32f';

export interface WavToWrite {
  /** Mono, full scale ±1, finite. */
  readonly samples: Float64Array;
  /** A whole number above 0. */
  readonly sampleRateHertz: number;
  readonly format: WavCoding;
  /** Kept in the file as its comment; empty: no list of information is written. */
  readonly comment: string;
  /** Any whole number; the same seed gives the same file. Used at 16 bits only; null: no dither. */
  readonly ditherSeed: number | null;
}

export interface WrittenWav {
  readonly bytes: Uint8Array;
  /** Samples beyond ±1 that were held at full scale; always 0 for float, which holds them as they are. */
  readonly clippedSamples: number;
}

const BYTES_PER_SAMPLE: Readonly<Record<WavCoding, number>> = { '16': 2, '24': 3, '32f': 4 };

/** Samples that are encoded at a time: half an hour would not fit beside its own copies. */
const SEGMENT_SAMPLES = 2 ** 18;

/** Bytes of the encoder's header. */
const PLAIN_HEADER = 44;

/** Largest RIFF size that its 32-bit field can hold. */
const LARGEST_RIFF_SIZE = 0xffff_ffff;

/**
 * Writes a mono WAV file.
 *
 * 24 bits: nearest step, halves to even. 16 bits: the same after triangular dither of ±1 step, which makes the error's
 * mean and variance independent of the sound (Lipshitz, Wannamaker, Vanderkooy, Quantization and Dither, J. Audio Eng.
 * Soc. 40, 1992, from memory). 32-bit float: a format chunk of 18 bytes and a `fact` chunk, as its tag asks.
 *
 * @returns the file's bytes and how many samples were held at full scale
 * @throws InputError `wav-too-long` above 4 GiB
 * @throws Error when a sample is no finite number or the rate is no whole number: a fault of the program
 */
export function writeWav(sound: WavToWrite): WrittenWav {
  const { samples, sampleRateHertz, format } = sound;
  if (!Number.isInteger(sampleRateHertz) || sampleRateHertz < 1 || sampleRateHertz > 0x7fff_ffff) {
    throw new Error(`internal: WAV sample rate ${sampleRateHertz}`);
  }
  const information = sound.comment === '' ? new Uint8Array(0) : informationList(sound.comment);
  const fileBytes = wavFileBytes(samples.length, format, information.length);
  const encoded = (steps: Float32Array): Uint8Array =>
    new Uint8Array(
      wavEncoder.encode.sync(
        { sampleRate: sampleRateHertz, channelData: [steps] },
        { bitDepth: format === '16' ? 16 : format === '24' ? 24 : 32, float: format === '32f', symmetric: true },
      ),
    );
  const bytes = new Uint8Array(fileBytes);
  const view = new DataView(bytes.buffer);
  const header = encoded(new Float32Array(0));
  if (format === '32f') copyWithFact(header, bytes, samples.length);
  else bytes.set(header);
  const body = format === '32f' ? 58 : PLAIN_HEADER;
  const dither = format === '16' && sound.ditherSeed !== null ? triangularDither(sound.ditherSeed) : () => 0;
  let clippedSamples = 0;
  for (let from = 0; from < samples.length; from += SEGMENT_SAMPLES) {
    const segment = samples.subarray(from, from + SEGMENT_SAMPLES);
    const coded = format === '32f' ? toFloat32(segment, from) : toSteps(segment, from, format, dither);
    clippedSamples += coded.clippedSamples;
    bytes.set(encoded(coded.steps).subarray(PLAIN_HEADER), body + from * BYTES_PER_SAMPLE[format]);
  }
  view.setUint32(4, fileBytes - 8, true);
  view.setUint32(body - 4, samples.length * BYTES_PER_SAMPLE[format], true);
  bytes.set(information, fileBytes - information.length);
  return { bytes, clippedSamples };
}

/**
 * Size of the file that `writeWav` makes, bytes, with the pad byte of an odd sample area.
 *
 * @param informationBytes  size of the list of information, even, 0 for none
 * @throws InputError `wav-too-long` when the file's 32-bit sizes cannot hold it
 */
export function wavFileBytes(frames: number, format: WavCoding, informationBytes: number): number {
  const dataBytes = frames * BYTES_PER_SAMPLE[format];
  const bytes = (format === '32f' ? 58 : 44) + dataBytes + (dataBytes % 2) + informationBytes;
  if (bytes - 8 > LARGEST_RIFF_SIZE) {
    throw new InputError({
      code: 'wav-too-long',
      where: 'sound to write',
      got: `${(bytes / 2 ** 30).toFixed(2)} GiB`,
      expected: 'less than 4 GiB, the most a WAV file holds',
      hint: 'use a shorter clip or 16-bit files',
    });
  }
  return bytes;
}

/**
 * Samples on the steps of the integer format, as floats that the encoder turns into exactly those integers: its own
 * rounding would work on the 32-bit float of a sample, half a step coarse near full scale, and push all halves up.
 */
function toSteps(
  samples: Float64Array,
  from: number,
  format: '16' | '24',
  dither: () => number,
): { readonly steps: Float32Array; readonly clippedSamples: number } {
  const scale = format === '16' ? 2 ** 15 : 2 ** 23;
  const steps = new Float32Array(samples.length);
  let clippedSamples = 0;
  for (let n = 0; n < samples.length; n++) {
    const sample = finite(samples[n]!, from + n);
    if (sample > 1 || sample < -1) clippedSamples++;
    const step = roundHalfToEven(sample * scale + dither());
    steps[n] = Math.max(-scale, Math.min(scale - 1, step)) / scale;
  }
  return { steps, clippedSamples };
}

function toFloat32(
  samples: Float64Array,
  from: number,
): { readonly steps: Float32Array; readonly clippedSamples: number } {
  const steps = new Float32Array(samples.length);
  for (let n = 0; n < samples.length; n++) {
    finite(samples[n]!, from + n);
    steps[n] = samples[n]!;
    finite(steps[n]!, from + n);
  }
  return { steps, clippedSamples: 0 };
}

function finite(sample: number, n: number): number {
  if (!Number.isFinite(sample)) throw new Error(`internal: sample ${n} to write is ${sample}`);
  return sample;
}

function roundHalfToEven(value: number): number {
  const down = Math.floor(value);
  const fraction = value - down;
  if (fraction !== 0.5) return fraction < 0.5 ? down : down + 1;
  return down % 2 === 0 ? down : down + 1;
}

/** Difference of two even random numbers of 0 to 1: a triangle over ±1. Generator: Marsaglia, Xorshift RNGs, 2003. */
function triangularDither(seed: number): () => number {
  let state = (Math.imul(seed | 0, 0x9e37_79b1) ^ 0x6d2b_79f5) >>> 0 || 1;
  const even = (): number => {
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    state >>>= 0;
    return state / 2 ** 32;
  };
  // the first numbers of neighbouring seeds are alike
  for (let n = 0; n < 16; n++) even();
  return () => even() - even();
}

/** Takes over the encoder's float file behind a format chunk of 18 bytes and a `fact` chunk with the frame count. */
function copyWithFact(plain: Uint8Array, target: Uint8Array, frames: number): void {
  const view = new DataView(target.buffer);
  target.set(plain.subarray(0, 36));
  view.setUint32(16, 18, true);
  view.setUint16(36, 0, true);
  target.set(ascii('fact'), 38);
  view.setUint32(42, 4, true);
  view.setUint32(46, frames, true);
  target.set(plain.subarray(36), 50);
}

/** LIST chunk of type INFO with the comment and the program's name, every text ended by NUL and padded to even size. */
function informationList(comment: string): Uint8Array {
  const parts = [entry('ICMT', onePlainLine(comment)), entry('ISFT', 'Presolder')];
  const bytes = 4 + parts.reduce((sum, part) => sum + part.length, 0);
  return Uint8Array.from([...ascii('LIST'), ...littleEndian(bytes), ...ascii('INFO'), ...parts.flat()]);
}

function entry(id: string, text: string): number[] {
  const body = [...new TextEncoder().encode(text), 0];
  return [...ascii(id), ...littleEndian(body.length), ...body, ...(body.length % 2 === 1 ? [0] : [])];
}

function ascii(text: string): number[] {
  return Array.from(text, (letter) => letter.charCodeAt(0));
}

function littleEndian(value: number): number[] {
  return [value & 255, (value >> 8) & 255, (value >> 16) & 255, (value >>> 24) & 255];
}
