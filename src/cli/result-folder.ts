import { mkdir, readdir, readFile, rename, rm, rmdir, stat, writeFile } from 'node:fs/promises';
import { basename, dirname, isAbsolute, join, relative, resolve, sep } from 'node:path';
import { InputError } from '../engine/errors.ts';
import { safeFileNames } from '../results/safe-names.ts';
import { asidePath, clearAside, clearStale, putBack, setUpName } from './earlier-set.ts';
import { isCode, writeFault } from './write-faults.ts';

/** One file of a result. */
export interface ResultFile {
  readonly name: string;
  readonly contents: string | Uint8Array;
}

/** Files of every result beside its sounds. */
const PAPER_FILES = ['result.json', 'response.csv', 'response.md', 'response.svg', 'sensitivity.svg', 'listening.html'];
/** Files of a spread; the first says what they are. */
const SPREAD_FILES = ['spread.json', 'spread.csv', 'spread.md', 'spread.svg'];
/** What a file manager leaves in folders it has shown; nobody misses it. */
const LITTER = ['.DS_Store', 'Thumbs.db', 'desktop.ini'];

const RESULTS_EXPECTED = 'a folder that results can be written to';

function folderFault(code: string, folder: string, got: string, hint: string): InputError {
  return new InputError({ code, where: folder, got, expected: RESULTS_EXPECTED, hint });
}

/** What stands at the place of the results: nothing, an empty folder, or earlier results and no other file. */
async function standing(folder: string): Promise<'nothing' | 'empty' | 'results'> {
  const place = resolve(folder);
  // a folder is replaced by renaming, and whoever works in it would be left in a folder that is no longer there
  if (isWithin(place, process.cwd())) {
    throw folderFault('out-is-here', folder, 'the folder you are working in', 'give --out the name of a folder in it');
  }
  let names: string[];
  try {
    if (!(await stat(place)).isDirectory()) {
      throw folderFault('out-not-a-folder', folder, 'a file', 'give --out a folder');
    }
    names = await readdir(place);
  } catch (error) {
    if (isCode(error, 'ENOENT')) return 'nothing';
    throw writeFault(folder, error, RESULTS_EXPECTED);
  }
  if (names.every((name) => LITTER.includes(name))) return 'empty';
  const ours = new Set([...LITTER, ...(await resultNames(place)), ...(await spreadNames(place))]);
  const others = names.filter((name) => !ours.has(name));
  if (others.length === 0) return 'results';
  const some = others.slice(0, 3).map((name) => JSON.stringify(name));
  throw folderFault(
    'out-in-use',
    folder,
    `a folder that holds other files${some.length > 0 ? `, such as ${some.join(', ')}` : ''}`,
    'give --out a new folder, or one that holds only earlier results',
  );
}

/** The files of earlier results in a folder, by what their result file says of itself; none where there is none. */
async function resultNames(place: string): Promise<string[]> {
  try {
    const result: unknown = JSON.parse(await readFile(join(place, 'result.json'), 'utf8'));
    if (!hasKey(result, 'format') || !String(result.format).startsWith('presolder-result/')) return [];
    const variants = hasKey(result, 'variants') && Array.isArray(result.variants) ? result.variants : [];
    const sounds = variants.map((variant: unknown) =>
      hasKey(variant, 'sound') && hasKey(variant.sound, 'file') ? String(variant.sound.file) : '',
    );
    return [...PAPER_FILES, ...sounds];
  } catch {
    return [];
  }
}

/** The same for a spread. */
async function spreadNames(place: string): Promise<readonly string[]> {
  try {
    const spread: unknown = JSON.parse(await readFile(join(place, 'spread.json'), 'utf8'));
    return hasKey(spread, 'format') && String(spread.format).startsWith('presolder-spread/') ? SPREAD_FILES : [];
  } catch {
    return [];
  }
}

function isWithin(folder: string, path: string): boolean {
  const way = relative(folder, path);
  return !isAbsolute(way) && way !== '..' && !way.startsWith(`..${sep}`);
}

function hasKey<Key extends string>(value: unknown, key: Key): value is Record<Key, unknown> {
  return typeof value === 'object' && value !== null && key in value;
}

/**
 * Checks before the work that the results will have a place, so that nobody waits for nothing. Leaves no trace, but
 * puts back earlier results that a killed run has left aside.
 *
 * @param inputs  files of the run, which no result may replace
 */
export async function checkFolder(folder: string, ...inputs: readonly string[]): Promise<void> {
  await putBack(resolve(folder));
  await standing(folder);
  const held = inputs.find((input) => isWithin(resolve(folder), resolve(input)));
  if (held !== undefined) {
    const got = `the folder that holds ${JSON.stringify(held)}`;
    throw folderFault('out-holds-input', folder, got, 'give --out another folder: what is read is never replaced');
  }
  try {
    const trial = join(await nearestFolder(dirname(resolve(folder))), setUpName());
    await mkdir(trial);
    await rm(trial, { recursive: true, force: true });
  } catch (error) {
    throw writeFault(folder, error, RESULTS_EXPECTED);
  }
}

/** The nearest of a folder and those above it that is there. */
async function nearestFolder(folder: string): Promise<string> {
  for (let place = folder; ; place = dirname(place)) {
    try {
      await stat(place);
      return place;
    } catch (error) {
      if (!isCode(error, 'ENOENT') || place === dirname(place)) throw error;
    }
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
  await putBack(place);
  const found = await standing(folder);
  const setUp = join(parent, setUpName());
  const old = asidePath(place);
  let made: string | undefined;
  try {
    made = await mkdir(parent, { recursive: true });
    await clearStale(parent);
    await mkdir(setUp);
    for (const { name, contents } of files) await writeFile(join(setUp, name), contents);
    if (found === 'results') await rename(place, old);
    else if (found === 'empty') await rm(place, { recursive: true });
    try {
      await rename(setUp, place);
    } catch (error) {
      // should that fail too, the next run puts it back
      if (found === 'results') await rename(old, place).catch(() => {});
      else if (found === 'empty') await mkdir(place);
      throw error;
    }
  } catch (error) {
    await rm(setUp, { recursive: true, force: true }).catch(() => {});
    await removeEmpty(parent, made).catch(() => {});
    throw writeFault(folder, error, RESULTS_EXPECTED);
  }
  // the new set stands whole: what earlier ones are still aside is spent
  await clearAside(place);
  return { replaced: found === 'results' };
}

/** Removes the folders that were made for a set, from the deepest up to the first made, as far as they are empty. */
async function removeEmpty(deepest: string, first: string | undefined): Promise<void> {
  if (first === undefined) return;
  for (let folder = deepest; isWithin(first, folder); folder = dirname(folder)) await rmdir(folder);
}

/** Name of the folder for a clip and a list: their names without folders and endings, safe for every file system. */
export function folderName(...paths: readonly string[]): string {
  const joined = paths.map((path) => basename(path).replace(/\.[^.]*$/, '')).join('-');
  return safeFileNames([joined])[0] as string;
}
