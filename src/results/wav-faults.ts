import { InputError } from '../engine/errors.ts';

/** Remedy that works for every sound editor and every fault of a WAV file's coding. */
export const EXPORT_AS_PCM = 'export it as 16-bit PCM WAV, mono, at 44.1 or 48 kHz';

/** The sample rates a clip may have, hertz. */
export const LOWEST_RATE_HERTZ = 8_000;
export const HIGHEST_RATE_HERTZ = 192_000;

/** Names of the encodings a WAVE file's format tag may announce (Microsoft, `mmreg.h`, from memory). */
const ENCODING_NAMES: Readonly<Record<number, string>> = {
  1: 'integer PCM',
  2: 'Microsoft ADPCM',
  3: 'floating point PCM',
  6: 'A-law',
  7: 'mu-law',
  17: 'IMA ADPCM',
  22: 'G.723 ADPCM',
  49: 'GSM 6.10',
  64: 'G.721 ADPCM',
  69: 'G.726 ADPCM',
  80: 'MPEG audio',
  85: 'MP3',
  146: 'AC-3',
  255: 'AAC',
  353: 'Windows Media Audio',
  354: 'Windows Media Audio',
  355: 'Windows Media Audio',
  26447: 'Ogg Vorbis',
  61868: 'FLAC',
  65534: 'extensible',
};

/** `A-law (0x0006)`, or `an unknown encoding (0x1234)`. */
export function encodingName(tag: number): string {
  return `${ENCODING_NAMES[tag] ?? 'an unknown encoding'} (0x${tag.toString(16).padStart(4, '0')})`;
}

/** A fault of one file, ready to throw. `hint` is left out where exporting again is no remedy. */
export function fileFault(
  code: string,
  fileName: string,
  got: string,
  expected: string,
  hint: string | null = EXPORT_AS_PCM,
): InputError {
  return new InputError({ code, where: fileName, got, expected, ...(hint === null ? {} : { hint }) });
}

/**
 * Refuses a sample rate or channel count that no clip may have.
 *
 * @throws InputError `clip-rate-zero`, `clip-rate-range`, `clip-no-channels`, `clip-channels`
 */
export function checkClipShape(fileName: string, sampleRateHertz: number, channelCount: number): void {
  if (channelCount === 0) {
    throw fileFault('clip-no-channels', fileName, '0 channels', 'mono or stereo');
  }
  if (channelCount > 2) {
    throw fileFault('clip-channels', fileName, `${channelCount} channels`, 'mono or stereo', 'mix it down to mono');
  }
  const range = `${LOWEST_RATE_HERTZ / 1000} to ${HIGHEST_RATE_HERTZ / 1000} kHz`;
  if (sampleRateHertz === 0) {
    throw fileFault('clip-rate-zero', fileName, 'a sample rate of 0', `a sample rate of ${range}`);
  }
  if (!(sampleRateHertz >= LOWEST_RATE_HERTZ && sampleRateHertz <= HIGHEST_RATE_HERTZ)) {
    throw fileFault('clip-rate-range', fileName, `a sample rate of ${sampleRateHertz} Hz`, range);
  }
}

/**
 * Whether bytes are readable text and so no sound: no NUL or other control byte within the first 512, or a UTF-16 mark.
 * Every WAV header has NUL bytes in its sizes.
 */
export function looksLikeText(bytes: Uint8Array): boolean {
  if (bytes.length >= 2 && ((bytes[0] === 0xff && bytes[1] === 0xfe) || (bytes[0] === 0xfe && bytes[1] === 0xff))) {
    // FF FE is also how an MPEG frame may start: text has a zero byte in every other place
    return bytes.length >= 4 && (bytes[2] === 0 || bytes[3] === 0);
  }
  const head = bytes.subarray(0, 512);
  if (head.length === 0) return false;
  if (head.some((byte) => (byte < 32 && byte !== 9 && byte !== 10 && byte !== 13 && byte !== 12) || byte === 127)) {
    return false;
  }
  return isUtf8(head);
}

/** Whether bytes are UTF-8, a sequence cut off at the end allowed. */
function isUtf8(bytes: Uint8Array): boolean {
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(bytes, { stream: true });
    return true;
  } catch {
    return false;
  }
}
