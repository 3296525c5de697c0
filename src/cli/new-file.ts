import { open, rm } from 'node:fs/promises';
import { resolve } from 'node:path';
import { InputError } from '../engine/errors.ts';
import { isCode, writeFault } from './write-faults.ts';

/** Writes one new file whole; refuses to replace one. */
export async function writeNewFile(path: string, contents: string | Uint8Array): Promise<void> {
  const place = resolve(path);
  try {
    const file = await open(place, 'wx');
    try {
      await file.writeFile(contents);
    } catch (error) {
      await rm(place, { force: true });
      throw error;
    } finally {
      await file.close();
    }
  } catch (error) {
    if (isCode(error, 'EEXIST')) {
      throw new InputError({
        code: 'file-exists',
        where: path,
        got: 'a name that is already taken',
        expected: 'a new name',
        hint: 'nothing is overwritten: give another name or move the old file',
      });
    }
    throw writeFault(path, error, 'a place where a new file can be written');
  }
}
