/** Byte-by-byte WAV files for tests: nothing here comes from the reader or the writer under test. */

export function text(letters: string): number[] {
  return Array.from(letters, (letter) => letter.charCodeAt(0));
}

export function u16(value: number): number[] {
  return [value & 255, (value >> 8) & 255];
}

export function u32(value: number): number[] {
  return [value & 255, (value >>> 8) & 255, (value >>> 16) & 255, (value >>> 24) & 255];
}

export function float32(value: number): number[] {
  return [...new Uint8Array(Float32Array.of(value).buffer)];
}

export function float64(value: number): number[] {
  return [...new Uint8Array(Float64Array.of(value).buffer)];
}

/** A chunk with its pad byte; `size` overrides what the header says. */
export function chunk(id: string, body: readonly number[], size = body.length): number[] {
  return [...text(id), ...u32(size), ...body, ...(body.length % 2 === 1 ? [0] : [])];
}

export interface FormatFields {
  readonly tag?: number;
  readonly channels?: number;
  readonly rate?: number;
  readonly bits?: number;
  readonly block?: number;
}

/** The 16 bytes that start every format chunk; 16-bit mono at 48 kHz unless told. */
export function formatBody(fields: FormatFields = {}): number[] {
  const { tag = 1, channels = 1, rate = 48_000, bits = 16 } = fields;
  const block = fields.block ?? (channels * bits) / 8;
  return [...u16(tag), ...u16(channels), ...u32(rate), ...u32((rate * block) >>> 0), ...u16(block), ...u16(bits)];
}

/** KSDATAFORMAT_SUBTYPE_PCM is {00000001-0000-0010-8000-00AA00389B71}, ..._IEEE_FLOAT the same with 3 (Microsoft, from memory). */
export const GUID_TAIL = [0, 0, 0, 0, 0x10, 0, 0x80, 0, 0, 0xaa, 0, 0x38, 0x9b, 0x71];

/** The 40 bytes of an extensible format chunk. */
export function extensibleBody(
  subTag: number,
  fields: FormatFields = {},
  validBits = fields.bits ?? 16,
  tail: readonly number[] = GUID_TAIL,
): number[] {
  return [...formatBody({ ...fields, tag: 0xfffe }), ...u16(22), ...u16(validBits), ...u32(4), ...u16(subTag), ...tail];
}

/** A whole file around chunks. */
export function riff(...chunks: readonly (readonly number[])[]): Uint8Array {
  const body = chunks.flat();
  return Uint8Array.from([...text('RIFF'), ...u32(4 + body.length), ...text('WAVE'), ...body]);
}

/** A plain file of samples given as bytes. */
export function plainWav(fields: FormatFields, data: readonly number[]): Uint8Array {
  return riff(chunk('fmt ', formatBody(fields)), chunk('data', data));
}
