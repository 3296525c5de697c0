import { randomBytes } from 'node:crypto';
import { mkdir, readdir, readFile, rename, rm, stat, writeFile } from 'node:fs/promises';
import { basename, dirname, join, resolve } from 'node:path';
import { InputError } from '../engine/errors.ts';

/** One file of a result. */
export interface ResultFile {
  readonly name: string;
  readonly contents: string | Uint8Array;
}

/** Set-up folders of runs that were killed are cleared by the next run once they are this old, ms. */
const STALE_MILLISECONDS = 3_600_000;
const SETTING_UP = '.presolder-unfinished-';

function folderFault(code: string, folder: string, got: string, hint: string): InputError {
  return new InputError({ code, where: folder, got, expected: 'a folder that results can be written to', hint });
}

/** What stands at the place of the results: nothing, an empty folder, earlier results, or something else. */
async function standing(folder: string): Promise<'nothing' | 'empty' | 'results'> {
  let names: string[];
  try {
    if (!(await stat(folder)).isDirectory()) {
      throw folderFault('out-not-a-folder', folder, 'a file', 'give --out a folder');
    }
    names = await readdir(folder);
  } catch (error) {
    if (error instanceof InputError) throw error;
    if (isCode(error, 'ENOENT')) return 'nothing';
    throw writeFault(folder, error);
  }
  if (names.length === 0) return 'empty';
  if (names.includes('result.json')) {
    const text = await readFile(join(folder, 'result.json'), 'utf8').catch(() => '');
    if (text.slice(0, 200).includes('presolder-result/')) return 'results';
  }
  throw folderFault(
    'out-in-use',
    folder,
    'a folder that holds other files',
    'give --out a new folder, or one that holds only earlier results',
  );
}

/** Checks before the work that the results will have a place, so that nobody waits for nothing. */
export async function checkFolder(folder: string): Promise<void> {
  await standing(resolve(folder));
  const parent = dirname(resolve(folder));
  try {
    await mkdir(parent, { recursive: true });
    const trial = join(parent, `${SETTING_UP}${randomBytes(4).toString('hex')}`);
    await mkdir(trial);
    await rm(trial, { recursive: true, force: true });
  } catch (error) {
    throw writeFault(folder, error);
  }
}

/**
 * Writes a whole set of results: into a set-up folder beside the place first, then renamed, so that the place holds
 * either the old set or the new one, whole. Earlier results there are replaced as a set.
 *
 * @returns whether earlier results were replaced
 * Raises InputError `out-…` for a place that cannot be written.
 */
export async function writeResults(folder: string, files: readonly ResultFile[]): Promise<{ replaced: boolean }> {
  const place = resolve(folder);
  const parent = dirname(place);
  const found = await standing(place);
  const setUp = join(parent, `${SETTING_UP}${randomBytes(4).toString('hex')}`);
  const old = `${setUp}-old`;
  try {
    await mkdir(parent, { recursive: true });
    await clearStale(parent);
    await mkdir(setUp);
    for (const { name, contents } of files) await writeFile(join(setUp, name), contents);
    if (found === 'results') await rename(place, old);
    else if (found === 'empty') await rm(place, { recursive: true });
    try {
      await rename(setUp, place);
    } catch (error) {
      if (found === 'results') await rename(old, place);
      throw error;
    }
    await rm(old, { recursive: true, force: true });
  } catch (error) {
    await rm(setUp, { recursive: true, force: true }).catch(() => {});
    throw writeFault(folder, error);
  }
  return { replaced: found === 'results' };
}

async function clearStale(parent: string): Promise<void> {
  for (const name of await readdir(parent)) {
    if (!name.startsWith(SETTING_UP)) continue;
    const path = join(parent, name);
    const age = Date.now() - (await stat(path)).mtimeMs;
    // a set moved aside by a run that died between two renames is the only copy: put it back, never throw it away
    if (age > STALE_MILLISECONDS && !name.endsWith('-old')) await rm(path, { recursive: true, force: true });
  }
}

/** Writes one new file whole; refuses to replace one. */
export async function writeNewFile(path: string, contents: string): Promise<void> {
  const place = resolve(path);
  try {
    await writeFile(place, contents, { flag: 'wx' });
  } catch (error) {
    if (isCode(error, 'EEXIST')) {
      throw new InputError({
        code: 'file-exists',
        where: path,
        got: 'a file that is already there',
        expected: 'a new name',
        hint: 'nothing is overwritten: give another name or move the old file',
      });
    }
    throw writeFault(path, error);
  }
}

function isCode(error: unknown, code: string): boolean {
  return error instanceof Error && 'code' in error && error.code === code;
}

function writeFault(where: string, error: unknown): unknown {
  if (error instanceof InputError || !(error instanceof Error) || !('code' in error)) return error;
  const reasons: Record<string, [string, string]> = {
    EACCES: ['a place without leave to write', 'choose a folder of your own with --out'],
    EPERM: ['a place without leave to write', 'choose a folder of your own with --out'],
    EROFS: ['a read-only place', 'choose a folder on another disk with --out'],
    ENOSPC: ['a full disk', 'free some space, or choose another disk with --out'],
    ENOENT: ['a folder that cannot be made', 'check the name'],
    ENOTDIR: ['a path that leads through a file', 'check the name'],
    EEXIST: ['a file in the way', 'check the name'],
    ENAMETOOLONG: ['a name that is too long', 'give a shorter one'],
    EBUSY: ['a folder in use by another program', 'close what has it open'],
  };
  const found = reasons[String(error.code)];
  if (!found) return error;
  return folderFault(`out-${String(error.code).toLowerCase()}`, where, found[0], found[1]);
}

/** Name of the folder for a clip and a list: their names without folders and endings. */
export function folderName(...paths: readonly string[]): string {
  return paths.map((path) => basename(path).replace(/\.[^.]*$/, '')).join('-');
}
