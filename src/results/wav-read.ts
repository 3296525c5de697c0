import wavDecoder from 'wav-decoder';
import { toMono } from '../engine/station/programme.ts';
import { findWavData, truncatedHeader, type WavFormat } from './wav-chunks.ts';
import { checkClipShape, fileFault, looksLikeText } from './wav-faults.ts';

/** Sound as read from a file. Full scale is ±1; a float file may exceed it. */
export interface ReadSound {
  readonly sampleRateHertz: number;
  /** One array a channel, one or two of them, all of `frames` finite samples; decoded anew each time it is asked for. */
  readonly channels: readonly Float64Array[];
  readonly frames: number;
  /** What was odd about the file yet did not prevent reading it, in plain words without the file's name. */
  readonly warnings: readonly string[];
  /** Both sides summed, or the one asked for: an array of the caller's own, made without the channels in between. */
  mono(side: 'both' | 'left' | 'right'): Float64Array;
}

/** Frames that are decoded at a time: half an hour in stereo would not fit beside its own copies. */
const SEGMENT_FRAMES = 2 ** 18;

/**
 * Reads a WAV file: 8-, 16-, 24- and 32-bit integer, 32- and 64-bit float, mono or stereo, 8 to 192 kHz.
 *
 * Integer samples of n bits are divided by 2^(n−1), so that no harmonic is added. 8, 16, 24 bits and 32-bit float are
 * exact; 32-bit integers and 64-bit floats are rounded to 32-bit float (relative error at most 2^−24).
 *
 * @param bytes     the whole file
 * @param fileName  as faults shall name it
 * @throws InputError: `clip-empty`, `clip-text`, `clip-rate-zero`, `clip-rate-range`, `clip-no-channels`,
 *   `clip-channels`, `clip-no-samples`, or one of the `wav-…` codes
 */
export function readWav(bytes: Uint8Array, fileName: string): ReadSound {
  checkContainer(bytes, fileName);
  const { format, dataStart, dataBytes, warnings } = findWavData(bytes, fileName);
  checkClipShape(fileName, format.sampleRateHertz, format.channelCount);
  const frameBytes = (format.bits / 8) * format.channelCount;
  if (format.frameBytes !== frameBytes) {
    const got = `a block of ${format.frameBytes} bytes for ${format.channelCount} × ${format.bits} bits`;
    throw fileFault('wav-block-size', fileName, got, `${frameBytes} bytes`);
  }
  const frames = Math.floor(dataBytes / frameBytes);
  if (frames === 0) throw fileFault('clip-no-samples', fileName, 'no sound', 'at least one sample');
  const odd = dataBytes - frames * frameBytes;
  const all = odd > 0 && warnings.length === 0 ? [`its last ${odd} bytes are no whole sample and were left out`] : [];
  const data = bytes.subarray(dataStart, dataStart + frames * frameBytes);
  return new WavSound(format, data, frames, [...warnings, ...all]);
}

/** A WAV file's samples, decoded a segment at a time when they are asked for. */
class WavSound implements ReadSound {
  readonly sampleRateHertz: number;
  readonly frames: number;
  readonly warnings: readonly string[];
  private readonly format: WavFormat;
  private readonly data: Uint8Array;

  constructor(format: WavFormat, data: Uint8Array, frames: number, warnings: readonly string[]) {
    this.format = format;
    this.data = data;
    this.frames = frames;
    this.sampleRateHertz = format.sampleRateHertz;
    let replaced = 0;
    if (format.coding !== 'integer') {
      this.each((_, __, odd) => {
        replaced += odd;
      });
    }
    this.warnings = withReplaced(warnings, replaced);
  }

  get channels(): readonly Float64Array[] {
    const whole = Array.from({ length: this.format.channelCount }, () => new Float64Array(this.frames));
    this.each((segment, from) => {
      for (const [k, samples] of segment.entries()) whole[k]?.set(samples, from);
    });
    return whole;
  }

  mono(side: 'both' | 'left' | 'right'): Float64Array {
    const whole = new Float64Array(this.frames);
    this.each((segment, from) => {
      whole.set(
        toMono(
          segment.map((samples) => Float64Array.from(samples)),
          side,
        ),
        from,
      );
    });
    return whole;
  }

  private each(use: (segment: readonly Float32Array[], from: number, replaced: number) => void): void {
    for (let from = 0; from < this.frames; from += SEGMENT_FRAMES) {
      const to = Math.min(this.frames, from + SEGMENT_FRAMES);
      const bytes = this.data.subarray(from * this.format.frameBytes, to * this.format.frameBytes);
      const { channelData } = wavDecoder.decode.sync(canonicalWav(this.format, bytes), { symmetric: true });
      use(channelData, from, replaceOdd(channelData));
    }
  }
}

/** Puts 0 in place of every sample that is no finite number; how many there were. */
function replaceOdd(channels: readonly Float32Array[]): number {
  let replaced = 0;
  for (const samples of channels) {
    for (let n = 0; n < samples.length; n++) {
      if (Number.isFinite(samples[n])) continue;
      samples[n] = 0;
      replaced++;
    }
  }
  return replaced;
}

function withReplaced(warnings: readonly string[], replaced: number): string[] {
  const odd = replaced === 0 ? [] : [`${replaced} ${replaced === 1 ? 'sample is' : 'samples are'} no number; set to 0`];
  return [...warnings, ...odd];
}

/**
 * Takes over decoded channels, with 0 in place of every sample that is no finite number and a warning with their count.
 *
 * @param channels  one array a channel, all of one length
 * @param warnings  those already given
 */
export function finiteSound(
  channels: readonly Float32Array[],
  sampleRateHertz: number,
  warnings: readonly string[],
): ReadSound {
  const replaced = replaceOdd(channels);
  const clean = channels.map((samples) => Float64Array.from(samples));
  return {
    sampleRateHertz,
    channels: clean,
    frames: clean[0]?.length ?? 0,
    warnings: withReplaced(warnings, replaced),
    mono: (side) => toMono(clean, side),
  };
}

function checkContainer(bytes: Uint8Array, fileName: string): void {
  if (bytes.length === 0) throw fileFault('clip-empty', fileName, 'an empty file', 'a WAV file');
  const word = (at: number): string => String.fromCharCode(...bytes.subarray(at, at + 4));
  const kind = word(0);
  if (bytes.length < 12 && 'RIFF'.startsWith(kind.slice(0, bytes.length)))
    throw truncatedHeader(fileName, bytes.length);
  if (looksLikeText(bytes)) throw fileFault('clip-text', fileName, 'text, not sound', 'a WAV file', null);
  if (kind === 'RF64' || kind === 'BW64') {
    throw fileFault('wav-rf64', fileName, `an ${kind} file (the WAV form for over 4 GiB)`, 'a WAV file');
  }
  if (kind === 'RIFX') throw fileFault('wav-rifx', fileName, 'a big-endian WAV file (RIFX)', 'a RIFF WAV file');
  if (kind !== 'RIFF') throw fileFault('wav-not-riff', fileName, 'no RIFF file', 'a WAV file');
  if (word(8) !== 'WAVE')
    throw fileFault('wav-not-wave', fileName, 'a RIFF file without sound (no WAVE)', 'a WAV file');
}

/**
 * The same samples behind the plainest header. The decoder takes no extensible file, adds half a step of direct voltage
 * to 8 bits and turns the most negative 24-bit sample positive, so 8 and 24 bits are widened to 16 and 32 first.
 */
function canonicalWav(format: WavFormat, data: Uint8Array): ArrayBuffer {
  const widen = format.coding === 'integer' && (format.bits === 8 || format.bits === 24);
  const bytesIn = format.bits / 8;
  const bytesOut = widen ? bytesIn + 1 : bytesIn;
  const samples = data.length / bytesIn;
  const file = new ArrayBuffer(44 + samples * bytesOut);
  const view = new DataView(file);
  const body = new Uint8Array(file, 44);
  [0x5249_4646, 0, 0x5741_5645, 0x666d_7420].forEach((word, i) => {
    view.setUint32(4 * i, word);
  });
  view.setUint32(4, file.byteLength - 8, true);
  view.setUint32(16, 16, true);
  view.setUint16(20, format.coding === 'integer' ? 1 : 3, true);
  view.setUint16(22, format.channelCount, true);
  view.setUint32(24, format.sampleRateHertz, true);
  view.setUint32(28, format.sampleRateHertz * format.channelCount * bytesOut, true);
  view.setUint16(32, format.channelCount * bytesOut, true);
  view.setUint16(34, bytesOut * 8, true);
  view.setUint32(36, 0x6461_7461);
  view.setUint32(40, samples * bytesOut, true);
  if (!widen) body.set(data);
  else if (bytesIn === 1) for (let n = 0; n < samples; n++) body[2 * n + 1] = data[n]! ^ 0x80;
  else {
    for (let n = 0; n < samples; n++) {
      body[4 * n + 1] = data[3 * n]!;
      body[4 * n + 2] = data[3 * n + 1]!;
      body[4 * n + 3] = data[3 * n + 2]!;
    }
  }
  return file;
}
