/** How samples of a clip are kept in the page: whole numbers of 16 or 24 bits, or floats; always without loss. */
export type ClipCoding = '16' | '24' | '32f' | '64f';

export interface CodedSamples {
  readonly coding: ClipCoding;
  /** Base64 of the samples' bytes, low byte first. */
  readonly base64: string;
}

const BYTES: Readonly<Record<ClipCoding, number>> = { '16': 2, '24': 3, '32f': 4, '64f': 8 };

/** The smallest coding that gives every sample back as it is. */
export function losslessCoding(samples: Float64Array): ClipCoding {
  if (samples.every((value) => isStep(value, 2 ** 15))) return '16';
  if (samples.every((value) => isStep(value, 2 ** 23))) return '24';
  return samples.every((value) => Math.fround(value) === value) ? '32f' : '64f';
}

function isStep(value: number, scale: number): boolean {
  const step = value * scale;
  // a minus zero would come back as zero, which is the same sample
  return Number.isInteger(step) && step >= -scale && step < scale;
}

/** Bytes of the samples in a coding that holds them. */
export function bytesOfSamples(samples: Float64Array, coding: ClipCoding): Uint8Array {
  const bytes = new Uint8Array(samples.length * BYTES[coding]);
  const view = new DataView(bytes.buffer);
  samples.forEach((value, n) => {
    if (coding === '16') view.setInt16(2 * n, value * 2 ** 15, true);
    else if (coding === '32f') view.setFloat32(4 * n, value, true);
    else if (coding === '64f') view.setFloat64(8 * n, value, true);
    else {
      const step = value * 2 ** 23;
      view.setUint16(3 * n, step & 0xffff, true);
      view.setInt8(3 * n + 2, step >> 16);
    }
  });
  return bytes;
}

/** The samples back from their bytes. */
export function samplesOfBytes(bytes: Uint8Array, coding: ClipCoding): Float64Array {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const read = {
    '16': (n: number) => view.getInt16(2 * n, true) / 2 ** 15,
    '24': (n: number) => (view.getInt8(3 * n + 2) * 2 ** 16 + view.getUint16(3 * n, true)) / 2 ** 23,
    '32f': (n: number) => view.getFloat32(4 * n, true),
    '64f': (n: number) => view.getFloat64(8 * n, true),
  }[coding];
  const samples = new Float64Array(Math.floor(bytes.length / BYTES[coding]));
  for (let n = 0; n < samples.length; n++) samples[n] = read(n);
  return samples;
}
