import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, symlinkSync, utimesSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { checkFolder, folderName, writeResults } from '../../src/cli/result-folder.ts';
import { InputError } from '../../src/engine/errors.ts';
import { freshFolder, listing, ran, saved, shortClip } from './command-run.ts';
import { plainWav } from './wav-crafting.ts';

/** A stand-in for a file system that refuses one renaming, as a folder in use does on Windows; 0: none. */
const renaming = vi.hoisted(() => ({ refused: 0, done: 0 }));
vi.mock('node:fs/promises', async (original) => {
  const real = await original<typeof import('node:fs/promises')>();
  return {
    ...real,
    rename: async (from: string, to: string): Promise<void> => {
      if (++renaming.done === renaming.refused) throw Object.assign(new Error('in use'), { code: 'EBUSY' });
      return real.rename(from, to);
    },
  };
});

/** A stiff source, whose analysis is the quickest. */
const STIFF = 'tuned circuit: { loaded Q: 40 }\n';

let folder = '';
let place = '';
beforeEach(() => {
  Object.assign(renaming, { refused: 0, done: 0 });
  folder = freshFolder();
  place = join(folder, 'out', 'set');
});
afterEach(() => {
  rmSync(folder, { recursive: true });
});

/** A result file as far as a folder is judged by it. */
function resultFile(...sounds: readonly string[]): { name: string; contents: string } {
  const variants = sounds.map((file) => ({ name: file, sound: { file } }));
  return { name: 'result.json', contents: JSON.stringify({ format: 'presolder-result/1', variants }) };
}

const OLD = [
  { name: 'a.wav', contents: 'old sound' },
  { name: 'b.wav', contents: Uint8Array.of(1, 2, 3) },
  resultFile('a.wav', 'b.wav'),
  { name: 'response.csv', contents: 'old table' },
];
const NEW = [{ name: 'c.wav', contents: 'new sound' }, resultFile('c.wav')];

async function codeOf(work: Promise<unknown>): Promise<string> {
  try {
    await work;
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return error.faults.map((fault) => fault.code).join();
  }
  return 'done';
}

describe('a set of results', () => {
  it('comes whole into a folder that is made for it, byte for byte', async () => {
    expect(await writeResults(place, OLD)).toEqual({ replaced: false });
    expect(readdirSync(place).sort()).toEqual(['a.wav', 'b.wav', 'response.csv', 'result.json']);
    expect([...readFileSync(join(place, 'b.wav'))]).toEqual([1, 2, 3]);
    expect(readFileSync(join(place, 'a.wav'), 'utf8')).toBe('old sound');
    expect(readdirSync(join(folder, 'out'))).toEqual(['set']);
  });

  it('takes an empty folder, or one in which a file manager left its mark', async () => {
    mkdirSync(place, { recursive: true });
    expect(await writeResults(place, OLD)).toEqual({ replaced: false });
    const other = join(folder, 'shown');
    mkdirSync(other);
    saved(other, '.DS_Store', 'x');
    expect(await writeResults(other, NEW)).toEqual({ replaced: false });
    expect(readdirSync(other).sort()).toEqual(['c.wav', 'result.json']);
  });

  it('replaces an earlier set whole: nothing of it stays', async () => {
    await writeResults(place, OLD);
    saved(place, 'Thumbs.db', 'x');
    expect(await writeResults(place, NEW)).toEqual({ replaced: true });
    expect(readdirSync(place).sort()).toEqual(['c.wav', 'result.json']);
    expect(readdirSync(join(folder, 'out'))).toEqual(['set']);
  });

  it.each([
    ['notes', 'notes.txt', 'mine'],
    ['a sound of its own', 'c.wav', 'mine'],
    ['a parts list', 'set.yaml', 'name: set'],
  ])('never replaces one that lies among other files: %s', async (_, name, contents) => {
    await writeResults(place, OLD);
    saved(place, name, contents);
    const before = listing(folder);
    expect(await codeOf(writeResults(place, NEW))).toBe('out-in-use');
    expect(await codeOf(checkFolder(place))).toBe('out-in-use');
    expect(listing(folder)).toEqual(before);
  });

  it('never replaces a folder within the results', async () => {
    await writeResults(place, OLD);
    mkdirSync(join(place, 'deeper'));
    expect(await codeOf(writeResults(place, NEW))).toBe('out-in-use');
  });

  it.each([
    ['of another kind', '{ "format": "somebody-else/1", "variants": [] }'],
    ['that is no JSON', 'presolder-result/1'],
    ['that names our kind in passing', '{ "note": "presolder-result/1" }'],
    ['of null', 'null'],
  ])('never replaces a result file %s', async (_, contents) => {
    mkdirSync(place, { recursive: true });
    saved(place, 'result.json', contents);
    expect(await codeOf(writeResults(place, NEW))).toBe('out-in-use');
    expect(readFileSync(join(place, 'result.json'), 'utf8')).toBe(contents);
  });

  it('never replaces the folder of what is read', async () => {
    await writeResults(place, OLD);
    expect(await codeOf(checkFolder(place, join(place, 'a.wav')))).toBe('out-holds-input');
    expect(await codeOf(checkFolder(place, join(folder, 'a.wav')))).toBe('done');
  });

  it('put in place of a link to earlier results leaves what the link led to', async () => {
    if (process.platform === 'win32') return;
    await writeResults(place, OLD);
    const link = join(folder, 'link');
    symlinkSync(place, link);
    const before = listing(place);
    expect(await writeResults(link, NEW)).toEqual({ replaced: true });
    expect(readdirSync(link).sort()).toEqual(['c.wav', 'result.json']);
    expect(listing(place)).toEqual(before);
  });
});

describe('a failure in the middle', () => {
  it.each([
    ['a name that leads into no folder', 'none/x.wav'],
    ['a name too long', `${'x'.repeat(300)}.wav`],
    ['a name that no file can have', 'x\0.wav'],
    ['a name that is the folder', '.'],
  ])('%s leaves the old set whole and nothing else', async (_, name) => {
    await writeResults(place, OLD);
    const before = listing(folder);
    const work = writeResults(place, [...NEW, { name, contents: 'x' }, { name: 'd.wav', contents: 'x' }]);
    expect(await codeOf(work)).toMatch(/^out-/);
    expect(listing(folder)).toEqual(before);
  });

  it('leaves no folder where there was none', async () => {
    expect(await codeOf(writeResults(place, [...NEW, { name: 'none/x.wav', contents: 'x' }]))).toBe('out-enoent');
    expect(readdirSync(folder)).toEqual([]);
  });

  it('leaves an empty folder empty', async () => {
    mkdirSync(place, { recursive: true });
    expect(await codeOf(writeResults(place, [...NEW, { name: 'none/x.wav', contents: 'x' }]))).toBe('out-enoent');
    expect(listing(folder)).toEqual(['out/', 'out/set/']);
  });

  it.each([
    ['of the old set away', 1],
    ['of the new set into its place', 2],
  ])('a renaming %s that is refused leaves the old set whole and nothing else', async (_, nth) => {
    await writeResults(place, OLD);
    const before = listing(folder);
    Object.assign(renaming, { refused: nth, done: 0 });
    expect(await codeOf(writeResults(place, NEW))).toBe('out-ebusy');
    expect(listing(folder)).toEqual(before);
  });

  it('a renaming into an empty folder that is refused leaves it empty', async () => {
    mkdirSync(place, { recursive: true });
    Object.assign(renaming, { refused: 1, done: 0 });
    expect(await codeOf(writeResults(place, NEW))).toBe('out-ebusy');
    expect(listing(folder)).toEqual(['out/', 'out/set/']);
  });

  it('an old set that something holds open does not undo the new one', async () => {
    await writeResults(place, OLD);
    Object.assign(renaming, { refused: 3, done: 0 });
    expect(await writeResults(place, NEW)).toEqual({ replaced: true });
    expect(readdirSync(place).sort()).toEqual(['c.wav', 'result.json']);
  });

  it('a fault of the program comes through as it is', async () => {
    const broken = { name: 'x.wav', contents: Symbol('no contents') as never };
    await expect(writeResults(place, [broken])).rejects.toThrow(TypeError);
    expect(readdirSync(folder)).toEqual([]);
  });

  it('what runs that were killed have left is cleared after an hour, a set moved aside never', async () => {
    const twoHoursAgo = new Date(Date.now() - 7_200_000);
    for (const name of ['.presolder-unfinished-11111111', '.presolder-unfinished-22222222-old', '.presolder-other']) {
      mkdirSync(join(folder, name));
      saved(join(folder, name), 'a.wav', 'x');
      utimesSync(join(folder, name), twoHoursAgo, twoHoursAgo);
    }
    mkdirSync(join(folder, '.presolder-unfinished-33333333'));
    await writeResults(join(folder, 'set'), NEW);
    expect(readdirSync(folder).sort()).toEqual([
      '.presolder-other',
      '.presolder-unfinished-22222222-old',
      '.presolder-unfinished-33333333',
      'set',
    ]);
  });
});

describe('the check before the work', () => {
  it('finds a place however deep, and leaves no trace', async () => {
    expect(await codeOf(checkFolder(join(folder, 'a', 'b', 'c')))).toBe('done');
    expect(readdirSync(folder)).toEqual([]);
  });

  it('finds what cannot be', async () => {
    const file = saved(folder, 'file', 'x');
    expect(await codeOf(checkFolder(file))).toBe('out-not-a-folder');
    expect(await codeOf(checkFolder(join(file, 'a', 'b')))).toBe('out-enotdir');
    expect(await codeOf(checkFolder(join(folder, 'x\0')))).toBe('out-err_invalid_arg_value');
    expect(await codeOf(checkFolder('.'))).toBe('out-is-here');
    expect(await codeOf(checkFolder(''))).toBe('out-is-here');
  });
});

describe('the folder named after what is read', () => {
  it.each([
    [['clips/speech.wav'], 'speech'],
    [['speech.wav', 'lists/my set.yaml'], 'speech-my set'],
    [['a.b.flac', 'c'], 'a.b-c'],
    [['.wav'], 'variant'],
    [['...wav'], 'variant'],
    [['con.wav'], '_con'],
    [[`${'x'.repeat(200)}.wav`], 'x'.repeat(80)],
  ])('%j is %s', (paths, name) => {
    expect(folderName(...paths)).toBe(name);
  });

  it('lies under out, in the folder one works in', async () => {
    const [clip, list] = [saved(folder, 'clip.wav', shortClip(0.02)), saved(folder, 'my set.yaml', STIFF)];
    const here = process.cwd();
    process.chdir(folder);
    try {
      expect((await ran(['render', clip, list])).status).toBe(0);
    } finally {
      process.chdir(here);
    }
    expect(readdirSync(join(folder, 'out'))).toEqual(['clip-my set']);
    expect(existsSync(join(folder, 'out', 'clip-my set', 'as drawn.wav'))).toBe(true);
  });
});

describe('a stop', () => {
  const LIST = `${STIFF}variants:\n  a: {}\n  b: { plate.bypass: 1n }\n`;

  it('at any moment leaves the earlier set whole, nothing else, and status 130', async () => {
    const clip = saved(folder, 'clip.wav', shortClip(0.3));
    const list = saved(folder, 'set.yaml', LIST);
    let asked = 0;
    const counting = (): boolean => {
      asked++;
      return false;
    };
    expect((await ran(['render', clip, list, '--out', place], counting)).status).toBe(0);
    // 0.3 s are 4 blocks a variant; fewer questions would mean seconds without an answer in a long clip
    expect(asked).toBeGreaterThan(2 * 3);
    const before = listing(folder);
    for (const moment of [1, 2, Math.ceil(asked / 2), asked]) {
      let left = moment;
      const { status, out, err } = await ran(['render', clip, list, '--out', place], () => --left <= 0);
      expect([status, out, err]).toEqual([130, '', 'Stopped; nothing was written.\n']);
      expect(listing(folder)).toEqual(before);
    }
  });

  it('at the last moment before writing is heard', async () => {
    // silence needs no rendering, so that this moment is the only one
    const clip = saved(folder, 'silent.wav', plainWav({}, Array(200).fill(0)));
    const before = listing(folder);
    const { status, out } = await ran(['render', clip, '--out', place], () => true);
    expect([status, out]).toEqual([130, '']);
    expect(listing(folder)).toEqual(before);
  });

  it('of the other commands too', async () => {
    const list = saved(folder, 'set.yaml', LIST);
    const before = listing(folder);
    for (const argv of [
      ['respond', list, '--out', place],
      ['prove', list],
    ]) {
      const { status, out } = await ran(argv, () => true);
      expect([status, out]).toEqual([130, '']);
      expect(listing(folder)).toEqual(before);
    }
  });
});

describe('names that some file system takes ill', () => {
  it('come out safe, each in one file of its own', async () => {
    const names = ['CON', '../x', 'mix: a', 'MIX? A', 'result', '日'.repeat(80), `${'日'.repeat(79)}x`];
    const list = names.map((name, n) => `  ${JSON.stringify(name)}: { station.level: ${n + 1} mV }\n`).join('');
    const clip = saved(folder, 'clip.wav', shortClip(0.02));
    const set = saved(folder, 'set.yaml', `${STIFF}variants:\n${list}`);
    expect((await ran(['render', clip, set, '--out', place])).status).toBe(0);
    const result = JSON.parse(readFileSync(join(place, 'result.json'), 'utf8')) as {
      variants: { name: string; sound: { file: string } }[];
    };
    expect(result.variants.map((variant) => variant.name)).toEqual(names);
    const files = result.variants.map((variant) => variant.sound.file);
    expect(files).toEqual([
      '_CON.wav',
      '_..-x.wav',
      'mix- a.wav',
      'MIX- A (2).wav',
      '_result.wav',
      `${'日'.repeat(26)}.wav`,
      `${'日'.repeat(25)} (2).wav`,
    ]);
    const papers = ['result.json', 'response.csv', 'response.md', 'response.svg', 'listening.html'];
    expect(
      readdirSync(place)
        .filter((name) => !papers.includes(name))
        .sort(),
    ).toEqual([...files].sort());
    expect(readdirSync(folder).sort()).toEqual(['clip.wav', 'out', 'set.yaml']);
    // and are known again as results of ours
    expect((await ran(['respond', set, '--out', place])).status).toBe(0);
    expect(readdirSync(place).filter((name) => name.endsWith('.wav'))).toEqual([]);
  });
});
