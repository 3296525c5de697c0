import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { checkFolder, writeResults } from '../../src/cli/result-folder.ts';
import { InputError } from '../../src/engine/errors.ts';
import { freshFolder, listing, saved } from './command-run.ts';

/** A stand-in for a run that dies at one step of the file system, or for a disk that refuses one. */
const disk = vi.hoisted(() => ({ dies: '', at: 0, done: 0, code: '' }));
vi.mock('node:fs/promises', async (original) => {
  const real = await original<typeof import('node:fs/promises')>();
  /** From that step on nothing is done any more: what a killed process leaves. */
  const step = async <T>(name: string, work: () => Promise<T>): Promise<T> => {
    if (disk.dies === 'all') throw Object.assign(new Error('dead'), { code: 'EDEAD' });
    if (name === disk.dies && ++disk.done === disk.at) {
      if (disk.code !== '') throw Object.assign(new Error(disk.code), { code: disk.code });
      disk.dies = 'all';
      throw Object.assign(new Error('dead'), { code: 'EDEAD' });
    }
    return work();
  };
  return {
    ...real,
    rename: (from: string, to: string) => step('rename', () => real.rename(from, to)),
    rm: (path: string, options: { recursive: boolean }) => step('rm', () => real.rm(path, options)),
    rmdir: (path: string) => step('rmdir', () => real.rmdir(path)),
    mkdir: (path: string, options?: { recursive: boolean }) => step('mkdir', () => real.mkdir(path, options)),
    writeFile: (path: string, contents: string) =>
      step('writeFile', () => real.writeFile(path, contents)).catch(async (error: unknown) => {
        // a full disk takes the beginning of a file
        if (disk.code === 'ENOSPC') await real.writeFile(path, contents.slice(0, 3));
        throw error;
      }),
  };
});
const alive = (): void => {
  Object.assign(disk, { dies: '', at: 0, done: 0, code: '' });
};

let folder = '';
let place = '';
beforeEach(() => {
  alive();
  folder = freshFolder();
  place = join(folder, 'set');
});
afterEach(() => {
  alive();
  rmSync(folder, { recursive: true });
});

function setOf(word: string): { name: string; contents: string }[] {
  const variants = [{ name: word, sound: { file: `${word}.wav` } }];
  return [
    { name: `${word}.wav`, contents: `${word} sound` },
    { name: 'result.json', contents: JSON.stringify({ format: 'presolder-result/1', variants }) },
  ];
}
const visible = (): string[] => readdirSync(folder).filter((name) => !name.startsWith('.'));

describe('a run that dies', () => {
  const STEPS = [
    ['mkdir', 2],
    ['writeFile', 1],
    ['writeFile', 2],
    ['rename', 1],
    ['rename', 2],
    ['rename', 3],
    ['rm', 1],
  ] as const;

  it.each(STEPS)('at its %s number %i leaves one whole set, and the next run one set alone', async (dies, at) => {
    await writeResults(place, setOf('old'));
    Object.assign(disk, { dies, at, done: 0 });
    await writeResults(place, setOf('new')).catch(() => {});
    expect(disk.dies).toBe('all');
    alive();
    const between = dies === 'rename' && at === 2;
    expect(existsSync(place)).toBe(!between);
    // the check of the next run, before its work, already puts the old set back
    await checkFolder(place);
    const word = (dies === 'rename' && at === 3) || dies === 'rm' ? 'new' : 'old';
    expect(readdirSync(place).sort()).toEqual([`${word}.wav`, 'result.json'].sort());
    expect(readFileSync(join(place, `${word}.wav`), 'utf8')).toBe(`${word} sound`);
    expect(await writeResults(place, setOf('next'))).toEqual({ replaced: true });
    expect(readdirSync(place).sort()).toEqual(['next.wav', 'result.json']);
    expect(visible()).toEqual(['set']);
    // no set stays aside; what was being put together is cleared in its time
    expect(readdirSync(folder).filter((name) => name.includes('-old'))).toEqual([]);
  });

  it('between the renamings of one place leaves other places alone', async () => {
    await writeResults(place, setOf('old'));
    Object.assign(disk, { dies: 'rename', at: 2, done: 0 });
    await writeResults(place, setOf('new')).catch(() => {});
    alive();
    expect(await writeResults(join(folder, 'other'), setOf('other'))).toEqual({ replaced: false });
    expect(visible()).toEqual(['other']);
    expect(readdirSync(folder).filter((name) => name.includes('-old')).length).toBe(1);
    expect(await writeResults(place, setOf('next'))).toEqual({ replaced: true });
    expect(visible()).toEqual(['other', 'set']);
  });

  it('loses no set to a folder that was made in its place meanwhile', async () => {
    await writeResults(place, setOf('old'));
    Object.assign(disk, { dies: 'rename', at: 2, done: 0 });
    await writeResults(place, setOf('new')).catch(() => {});
    alive();
    mkdirSync(place);
    saved(place, 'notes.txt', 'mine');
    await expect(checkFolder(place)).rejects.toThrow(InputError);
    expect(readdirSync(folder).filter((name) => name.includes('-old')).length).toBe(1);
    expect(readdirSync(place)).toEqual(['notes.txt']);
  });
});

describe('a disk that refuses', () => {
  const REFUSALS = [
    ['ENOSPC', 'writeFile', 1, 'a full disk'],
    ['ENOSPC', 'writeFile', 2, 'a full disk'],
    ['ENOSPC', 'mkdir', 1, 'a full disk'],
    ['EROFS', 'mkdir', 2, 'a read-only place'],
    ['EACCES', 'mkdir', 2, 'a place without leave to write'],
    ['EIO', 'writeFile', 2, 'a place that cannot be written (EIO)'],
    ['EACCES', 'rename', 1, 'a place without leave to write'],
  ] as const;

  it.each(REFUSALS)('%s at its %s number %i leaves the old set whole and nothing else', async (code, dies, at, got) => {
    await writeResults(place, setOf('old'));
    const before = listing(folder);
    Object.assign(disk, { dies, at, done: 0, code });
    const fault = await writeResults(place, setOf('new')).catch((error: unknown) => error);
    alive();
    expect(fault).toBeInstanceOf(InputError);
    expect((fault as InputError).faults[0]).toMatchObject({ got, where: place });
    expect(listing(folder)).toEqual(before);
  });

  it.each(['EROFS', 'EACCES', 'ENOSPC'])('with %s is told before the work', async (code) => {
    Object.assign(disk, { dies: 'mkdir', at: 1, done: 0, code });
    const fault = await checkFolder(place).catch((error: unknown) => error);
    expect(fault).toBeInstanceOf(InputError);
    alive();
    expect(readdirSync(folder)).toEqual([]);
  });
});
