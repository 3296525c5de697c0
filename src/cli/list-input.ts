import { open } from 'node:fs/promises';
import { InputError } from '../engine/errors.ts';
import type { HearingCurve } from '../engine/hearing/hearing-curves.ts';
import { type AdjustableVariant, adjustableVariants } from '../list/adjustable.ts';
import { type ListedVariant, listVariants } from '../list/variants.ts';
import { hearingCurve } from './hearing-input.ts';
import { keySettings, type RawOptions } from './options.ts';

/** Largest parts list that is read, bytes: a hand-written list is a few kilobytes. */
const LARGEST_LIST_BYTES = 200_000;

/** A variant with the curve it is heard through. */
export interface RunVariant extends ListedVariant {
  readonly heard: HearingCurve;
}

/** Reads the parts list named on the command line (none: the standard set) and applies the flags. */
export async function variantsFrom(list: string | null, options: RawOptions): Promise<RunVariant[]> {
  const settings = keySettings(options);
  const variants = listVariants(list === null ? '' : await readList(list), list ?? 'standard set', settings);
  return Promise.all(
    variants.map(async (variant) => ({ ...variant, heard: await hearingCurve(variant.heardThrough, list) })),
  );
}

/** The same, with parts that can be given other values. */
export async function adjustableFrom(list: string | null, options: RawOptions): Promise<AdjustableVariant[]> {
  const settings = keySettings(options);
  const written = list === null ? '' : await readList(list);
  const name = list ?? 'standard set';
  // every fault of the list, told as other commands tell it
  listVariants(written, name, settings);
  return adjustableVariants(written, name, settings);
}

async function readList(path: string): Promise<string> {
  const wrong = (code: string, got: string, hint: string): InputError =>
    new InputError({ code, where: path, got, expected: 'a parts list, a YAML text file', hint });
  const bytes = await firstBytes(path, LARGEST_LIST_BYTES + 1).catch((error: unknown) => {
    const code = error instanceof Error && 'code' in error ? String(error.code) : '';
    if (code === 'ENOENT' || code === 'ENOTDIR' || code === 'ERR_INVALID_ARG_VALUE') {
      throw wrong('list-missing', 'no such file', 'the command presolder start writes one to begin with');
    }
    if (code === 'EISDIR') throw wrong('list-directory', 'a folder', 'name a file in it');
    const reason = code || 'no reason given';
    throw wrong('list-unreadable', `a file that cannot be read (${reason})`, 'check its permissions');
  });
  if (isUtf16(bytes)) throw wrong('list-not-utf8', 'text that is not UTF-8 but UTF-16', 'save it as UTF-8');
  if (bytes.includes(0)) throw wrong('list-not-text', 'a file that is not text', 'the clip comes first, then the list');
  if (bytes.length > LARGEST_LIST_BYTES) {
    throw wrong('list-too-large', `more than ${LARGEST_LIST_BYTES / 1000} kB`, 'the clip comes first, then the list');
  }
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw wrong('list-not-utf8', 'text that is not UTF-8', 'save it as UTF-8');
  }
}

/** The start of a file, a pipe or a device, no more of it than is asked for: a clip given for a list may be large. */
async function firstBytes(path: string, most: number): Promise<Uint8Array> {
  const file = await open(path, 'r');
  try {
    const bytes = new Uint8Array(most);
    let length = 0;
    while (length < most) {
      const { bytesRead } = await file.read(bytes, length, most - length, null);
      if (bytesRead === 0) break;
      length += bytesRead;
    }
    return bytes.subarray(0, length);
  } finally {
    await file.close();
  }
}

/** Whether text begins with the byte-order mark of UTF-16, as some editors save it. */
function isUtf16(bytes: Uint8Array): boolean {
  return (bytes[0] === 0xff && bytes[1] === 0xfe) || (bytes[0] === 0xfe && bytes[1] === 0xff);
}
