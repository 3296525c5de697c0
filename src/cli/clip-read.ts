import type { Stats } from 'node:fs';
import { InputError } from '../engine/errors.ts';
import { checkClipShape, fileFault, looksLikeText } from '../results/wav-faults.ts';
import { finiteSound, type ReadSound, readWav } from '../results/wav-read.ts';

/** Largest file that is read, bytes: hours of programme, and below what one buffer may hold. */
const LARGEST_FILE_BYTES = 2 ** 31 - 1;

const EXPECTED_CLIP = 'a sound file, best a WAV file';

/**
 * Reads a clip of programme from a file: WAV by our own reader, other formats (FLAC, MP3, Ogg, …) by the decoders of
 * the web audio package, loaded only then.
 *
 * @param path  as the person gave it; faults name it so
 * @throws InputError `clip-missing`, `clip-directory`, `clip-not-a-file`, `clip-unreadable`, `clip-too-large`,
 *   `clip-empty`, `clip-text`, `clip-undecodable`, `clip-no-samples`, or a fault of `readWav`
 */
export async function readClip(path: string): Promise<ReadSound> {
  const bytes = await readFileBytes(path);
  if (bytes.length === 0) throw fileFault('clip-empty', path, 'an empty file', EXPECTED_CLIP, null);
  if (isWav(bytes, path)) return readWav(bytes, path);
  if (looksLikeText(bytes)) {
    throw fileFault('clip-text', path, 'a text file, not audio', EXPECTED_CLIP, 'give the clip before the parts list');
  }
  return decodeOther(bytes, path);
}

async function readFileBytes(path: string): Promise<Uint8Array> {
  const { readFile, stat } = await import('node:fs/promises');
  let found: Stats;
  try {
    found = await stat(path);
  } catch (error) {
    throw accessFault(path, error);
  }
  if (found.isDirectory()) throw fileFault('clip-directory', path, 'a folder', EXPECTED_CLIP, 'name a file in it');
  if (!found.isFile()) throw fileFault('clip-not-a-file', path, 'a device or pipe', 'a file on disk', 'save it first');
  if (found.size > LARGEST_FILE_BYTES) {
    const got = `${(found.size / 2 ** 30).toFixed(1)} GiB`;
    throw fileFault('clip-too-large', path, got, 'less than 2 GiB', 'cut out the minutes that matter');
  }
  try {
    return await readFile(path);
  } catch (error) {
    throw accessFault(path, error);
  }
}

function accessFault(path: string, error: unknown): InputError {
  const code = error instanceof Error && 'code' in error ? String(error.code) : '';
  if (code === 'ENOENT' || code === 'ENOTDIR' || code === 'ERR_INVALID_ARG_VALUE') {
    return fileFault('clip-missing', path, 'no such file', EXPECTED_CLIP, 'check the name and the folder');
  }
  const got = code === 'EACCES' || code === 'EPERM' ? 'a file without leave to read it' : `a file that fails to read`;
  return fileFault('clip-unreadable', path, got + (code === '' ? '' : ` (${code})`), EXPECTED_CLIP, null);
}

/** Files that our reader shall judge: by their first bytes, or by their name when those are no other sound. */
function isWav(bytes: Uint8Array, path: string): boolean {
  const kind = String.fromCharCode(...bytes.subarray(0, 4));
  if (kind === 'RIFF' || kind === 'RIFX' || kind === 'RF64' || kind === 'BW64') return true;
  const otherSound = /^(fLaC|OggS|ID3|FORM|caff)/.test(kind) || (bytes[0] === 0xff && (bytes[1]! & 0xe0) === 0xe0);
  return /\.wave?$/i.test(path) && !otherSound;
}

async function decodeOther(bytes: Uint8Array, path: string): Promise<ReadSound> {
  const decoded = await decodeWithPackage(bytes, path);
  checkClipShape(path, decoded.sampleRate, decoded.channels.length);
  if ((decoded.channels[0]?.length ?? 0) === 0) {
    throw fileFault('clip-no-samples', path, 'no sound', 'at least one sample');
  }
  return finiteSound(decoded.channels, decoded.sampleRate, []);
}

/** Whatever the decoders throw becomes one fault: their texts name their own insides, not what to do. */
async function decodeWithPackage(
  bytes: Uint8Array,
  path: string,
): Promise<{ readonly sampleRate: number; readonly channels: readonly Float32Array[] }> {
  try {
    const { OfflineAudioContext } = await import('web-audio-api');
    const context = new OfflineAudioContext(1, 1, 48_000);
    // a copy of its own: a small file read by Node lies in a buffer shared with others
    const buffer = await context.decodeAudioData(Uint8Array.from(bytes).buffer);
    const channels = Array.from({ length: buffer.numberOfChannels }, (_, channel) => buffer.getChannelData(channel));
    return { sampleRate: buffer.sampleRate, channels };
  } catch (error) {
    if (error instanceof InputError) throw error;
    throw fileFault(
      'clip-undecodable',
      path,
      'a file in no known sound format, or a damaged one',
      'WAV, FLAC, MP3, Ogg Vorbis or Opus',
      'export it as 16-bit PCM WAV and give that',
    );
  }
}
