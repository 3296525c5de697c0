import { encodingName, fileFault } from './wav-faults.ts';

/** Coding of the samples, as the `fmt ` chunk states it (the sub-format for an extensible file). */
export interface WavFormat {
  readonly coding: 'integer' | 'float';
  readonly channelCount: number;
  readonly sampleRateHertz: number;
  /** Bytes of one frame: one sample of every channel. */
  readonly frameBytes: number;
  /** Bits of the container: 8, 16, 24, 32 or 64. */
  readonly bits: number;
}

/** Where the samples lie, and what was odd about the way. */
export interface WavLayout {
  readonly format: WavFormat;
  readonly dataStart: number;
  readonly dataBytes: number;
  readonly warnings: readonly string[];
}

/** Sizes from here up are written by programs that could not know the length: about 2 GiB and up to 0xFFFFFFFF. */
const STREAMED_SIZE = 0x7fff_f000;

/** Bytes 2 to 15 of the sub-format identifier of every encoding that has a format tag (Microsoft, from memory). */
const TAG_GUID_TAIL = [0x00, 0x00, 0x00, 0x00, 0x10, 0x00, 0x80, 0x00, 0x00, 0xaa, 0x00, 0x38, 0x9b, 0x71];

const EXPECTED_WAV = 'a WAV file';

/**
 * Finds the format and the first data chunk of a RIFF/WAVE file.
 *
 * @param bytes     the file, at least its 12-byte start, checked to be RIFF/WAVE
 * @param fileName  named in faults
 * @throws InputError with one of the `wav-…` codes of the fault found
 * Layout: Microsoft and IBM, Multimedia Programming Interface and Data Specifications 1.0 (from memory).
 */
export function findWavData(bytes: Uint8Array, fileName: string): WavLayout {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  let format: WavFormat | null = null;
  let position = 12;
  while (position + 8 <= bytes.length) {
    const id = chunkId(bytes, position);
    const size = view.getUint32(position + 4, true);
    const start = position + 8;
    if (id === 'data') {
      if (format === null) throw noFormatYet(bytes, view, start, size, fileName);
      return { format, dataStart: start, ...dataExtent(bytes, view, start, size) };
    }
    if (id === 'fmt ' && format === null) format = readFormat(bytes, view, start, size, fileName);
    position = nextChunk(bytes, start, size);
  }
  // one byte past the end is only a pad byte left out; anything else is a chunk that was cut
  const cut = position < bytes.length || position > bytes.length + 1;
  if (cut || bytes.length < 20) throw truncatedHeader(fileName, bytes.length);
  if (format === null) throw fileFault('wav-no-format', fileName, 'no format chunk', EXPECTED_WAV);
  throw fileFault('wav-no-data', fileName, 'no data chunk', 'a WAV file with sound in it');
}

/** The fault of a file that ends within its header. */
export function truncatedHeader(fileName: string, bytes: number): Error {
  return fileFault(
    'wav-header-cut',
    fileName,
    `a file cut off within its header (${bytes} bytes)`,
    'a whole WAV file of 44 bytes or more',
    'copy or export it again',
  );
}

function chunkId(bytes: Uint8Array, position: number): string {
  return String.fromCharCode(...bytes.subarray(position, position + 4));
}

/** A chunk of odd size is followed by one pad byte; a few writers leave it out, seen by a known name standing there. */
function nextChunk(bytes: Uint8Array, start: number, size: number): number {
  const end = start + size;
  if (size % 2 === 0) return end;
  const known = /^(fmt |data|fact|LIST)$/;
  return known.test(chunkId(bytes, end)) && !known.test(chunkId(bytes, end + 1)) ? end : end + 1;
}

function noFormatYet(bytes: Uint8Array, view: DataView, start: number, size: number, fileName: string): Error {
  let position = nextChunk(bytes, start, size);
  while (position + 8 <= bytes.length) {
    if (chunkId(bytes, position) === 'fmt ') {
      return fileFault('wav-data-before-format', fileName, 'sound before its format chunk', EXPECTED_WAV);
    }
    position = nextChunk(bytes, position + 8, view.getUint32(position + 4, true));
  }
  return fileFault('wav-no-format', fileName, 'no format chunk', EXPECTED_WAV);
}

function readFormat(bytes: Uint8Array, view: DataView, start: number, size: number, fileName: string): WavFormat {
  if (size < 16) {
    throw fileFault('wav-format-short', fileName, `a format chunk of ${size} bytes`, '16 bytes or more');
  }
  if (start + Math.min(size, 40) > bytes.length) throw truncatedHeader(fileName, bytes.length);
  let tag = view.getUint16(start, true);
  const bits = view.getUint16(start + 14, true);
  if (tag === 0xfffe) {
    if (size < 40) {
      throw fileFault('wav-extensible-short', fileName, `an extensible format chunk of ${size} bytes`, '40 bytes');
    }
    const validBits = view.getUint16(start + 18, true);
    if (validBits > bits) {
      throw fileFault('wav-valid-bits', fileName, `${validBits} valid bits in ${bits}`, `at most ${bits} valid bits`);
    }
    if (!TAG_GUID_TAIL.every((byte, i) => bytes[start + 26 + i] === byte)) {
      throw fileFault('wav-subformat', fileName, 'an unknown sub-format', 'integer or floating point PCM');
    }
    tag = view.getUint16(start + 24, true);
  }
  if (tag !== 1 && tag !== 3) {
    throw fileFault('wav-encoding', fileName, encodingName(tag), 'integer or floating point PCM');
  }
  const coding = tag === 1 ? 'integer' : 'float';
  if (!(coding === 'integer' ? [8, 16, 24, 32] : [32, 64]).includes(bits)) {
    const allowed = coding === 'integer' ? '8, 16, 24 or 32' : '32 or 64';
    throw fileFault('wav-bits', fileName, `${bits}-bit ${coding} samples`, `${allowed} bits`);
  }
  return {
    coding,
    channelCount: view.getUint16(start + 2, true),
    sampleRateHertz: view.getUint32(start + 4, true),
    frameBytes: view.getUint16(start + 12, true),
    bits,
  };
}

function dataExtent(
  bytes: Uint8Array,
  view: DataView,
  start: number,
  size: number,
): { readonly dataBytes: number; readonly warnings: string[] } {
  const remaining = bytes.length - start;
  const unknown = (size >= STREAMED_SIZE && size > remaining) || (size === 0 && !chunkFollows(bytes, view, start));
  if (unknown && remaining > 0) {
    return { dataBytes: remaining, warnings: ['its length is not stated (written as a stream): read to its end'] };
  }
  if (size > remaining) {
    const lost = size - remaining;
    return { dataBytes: remaining, warnings: [`cut off: ${lost} of ${size} bytes of sound are missing`] };
  }
  return { dataBytes: size, warnings: [] };
}

/** Whether what follows an empty data chunk is another chunk: four printable letters and a size that fits. */
function chunkFollows(bytes: Uint8Array, view: DataView, position: number): boolean {
  if (position + 8 > bytes.length) return false;
  const printable = bytes.subarray(position, position + 4).every((byte) => byte >= 32 && byte < 127);
  return printable && view.getUint32(position + 4, true) <= bytes.length - position - 8;
}
