import { createHash, randomBytes } from 'node:crypto';
import { readdir, rename, rm, stat } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';

/** Set-up folders of runs that were killed are cleared by the next run once they are this old, ms. */
const STALE_MILLISECONDS = 3_600_000;
const SETTING_UP = '.presolder-unfinished-';
const ASIDE = '-old';

/** Name of a hidden folder in which a set is put together. */
export function setUpName(): string {
  return SETTING_UP + randomBytes(4).toString('hex');
}

/** Where the set at a place waits while the new one takes it: hidden beside it, and known again by a later run. */
export function asidePath(place: string): string {
  return join(dirname(place), setUpName() + asideEnd(place));
}

/** By a digest, because the place's own name may be as long as names can be. */
function asideEnd(place: string): string {
  return `${ASIDE}-${createHash('sha256').update(basename(place)).digest('hex').slice(0, 12)}`;
}

/** Sets of a place that runs killed between two renamings have left aside. */
async function setsAside(place: string): Promise<string[]> {
  try {
    const names = await readdir(dirname(place));
    return names
      .filter((name) => name.startsWith(SETTING_UP) && name.endsWith(asideEnd(place)))
      .map((name) => join(dirname(place), name));
  } catch {
    // no folder, or not one that can be read: what is wrong with it is told where results are written to it
    return [];
  }
}

/** Puts a set that a killed run has left aside back where it was, when nothing stands there. */
export async function putBack(place: string): Promise<void> {
  for (const aside of await setsAside(place)) {
    try {
      await stat(place);
      return;
    } catch {
      // another run may be doing the same: then it is back all the same
      await rename(aside, place).catch(() => {});
    }
  }
}

/** Clears the sets aside of a place at which a whole set stands. */
export async function clearAside(place: string): Promise<void> {
  for (const aside of await setsAside(place)) {
    // under another name first: should something hold a file of it open, what is left is cleared with the stale ones
    const spent = join(dirname(place), setUpName());
    await rename(aside, spent)
      .then(() => rm(spent, { recursive: true, force: true }))
      .catch(() => {});
  }
}

/** Clears what killed runs had not yet put together. */
export async function clearStale(parent: string): Promise<void> {
  for (const name of await readdir(parent)) {
    // a set moved aside may be the only copy: never thrown away for its age
    if (!name.startsWith(SETTING_UP) || name.slice(SETTING_UP.length).includes(ASIDE)) continue;
    const path = join(parent, name);
    try {
      const age = Date.now() - (await stat(path)).mtimeMs;
      if (age > STALE_MILLISECONDS) await rm(path, { recursive: true, force: true });
    } catch {
      // another run's, gone meanwhile or not ours to clear
    }
  }
}
