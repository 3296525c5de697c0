import { readFile } from 'node:fs/promises';
import { InputError } from '../engine/errors.ts';
import { type ListedVariant, listVariants } from '../list/variants.ts';
import { keySettings, type RawOptions } from './options.ts';

/** Largest parts list that is read, bytes: a hand-written list is a few kilobytes. */
const LARGEST_LIST_BYTES = 1_000_000;

/** Reads the parts list named on the command line (none: the standard set) and applies the flags. */
export async function variantsFrom(list: string | null, options: RawOptions): Promise<ListedVariant[]> {
  const settings = keySettings(options);
  return listVariants(list === null ? '' : await readList(list), list ?? 'standard set', settings);
}

async function readList(path: string): Promise<string> {
  const wrong = (code: string, got: string, hint: string): InputError =>
    new InputError({ code, where: path, got, expected: 'a parts list, a YAML text file', hint });
  let bytes: Uint8Array;
  try {
    bytes = await readFile(path);
  } catch (error) {
    const code = error instanceof Error && 'code' in error ? String(error.code) : '';
    if (code === 'ENOENT' || code === 'ENOTDIR') {
      throw wrong('list-missing', 'no such file', 'presolder start writes one to begin with');
    }
    if (code === 'EISDIR') throw wrong('list-directory', 'a folder', 'name a file in it');
    throw wrong(
      'list-unreadable',
      `a file that cannot be read (${code || 'no reason given'})`,
      'check its permissions',
    );
  }
  if (bytes.length > LARGEST_LIST_BYTES) throw wrong('list-too-large', `${bytes.length} bytes`, 'is it the clip?');
  if (bytes.includes(0)) throw wrong('list-not-text', 'a file that is not text', 'the clip comes first, then the list');
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw wrong('list-not-utf8', 'text that is not UTF-8', 'save it as UTF-8');
  }
}
