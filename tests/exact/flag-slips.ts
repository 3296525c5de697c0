import { existsSync, readdirSync, readFileSync, rmSync, statSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { expect } from 'vitest';
import { PART_FLAGS } from '../../src/cli/options.ts';
import { freshFolder, type Ran, ran, saved, shortClip } from './command-run.ts';

const WORDS = [
  ...['', ' ', '0', '-1', '1', 'none', '2M2', '4k7', '100p', '47p,100p', '0.1 µF', '90V', '920kHz', '60mV', '80 %'],
  ...['grid leak', 'plate bend', 'diode', 'crystal', 'infinite impedance', 'square', 'linear', 'tube', '6SL7-GT'],
  ...['resistor 56k', 'choke', 'transformer 1:3', 'phones', 'plate.bypass=150p', 'plate.bypass', '=', 'station=3'],
  ...['E12', 'level', 'loudness', '16', '32f', 'fine', '1e400', 'NaN', 'Infinity', '-', '--', '--set', '\u202e'],
  ...['9'.repeat(300), 'x'.repeat(500), '__proto__=1', '../..', 'a\0b', 'con', 'corner 1 kHz', '-6 dB at 5 kHz'],
  ...['weak tube 60 %', 'leaky coupling 2M', 'bypass', 'leak', 'tubes', 'heard', '20k/V', '400', '1:3', ',', ',,,'],
];
// of those that open a browser, sound the speaker or take minutes by themselves, only the refusals
const FLAGS = [
  ...PART_FLAGS.map(([flag]) => `--${flag}`),
  ...['--set', '--set', '--out', '--match', '--wav', '--quality', '--measured', '--until', '--fit', '--series'],
  ...['--drawer', '--between', '--seed', '--parts', '--tones', '--depths', '--meter', '--ratio', '--source'],
  ...['--morse', '--speed', '--no-such', '-x'],
];
const COMMANDS = [
  'render',
  'respond',
  'choose',
  'spread',
  'stock',
  'start',
  'prove',
  'nonsense',
  '--help',
  '--version',
];

const word = fc.oneof(
  { weight: 6, arbitrary: fc.constantFrom(...WORDS) },
  { weight: 2, arbitrary: fc.constantFrom('clip.wav', 'set.yaml', 'sweep.csv', 'no-such.wav', '.') },
  { weight: 1, arbitrary: fc.string({ unit: 'binary', maxLength: 8 }) },
);
const argv = fc
  .tuple(
    fc.constantFrom(...COMMANDS),
    fc.array(word, { maxLength: 3 }),
    fc.array(fc.tuple(fc.constantFrom(...FLAGS), word), { maxLength: 4 }),
    fc.subarray(['--json', '--quiet']),
  )
  .map(([command, words, flags, bare]) => [command, ...words, ...flags.flat(), ...bare]);

/** Texts under a folder, for what no file may hold. */
function texts(folder: string): string[] {
  return readdirSync(folder, { recursive: true })
    .map((name) => join(folder, String(name)))
    .filter((path) => statSync(path).isFile() && /\.(json|csv|md|svg)$/.test(path) && !path.endsWith('sweep.csv'))
    .map((path) => readFileSync(path, 'utf8'));
}

/** Runs of the command with flags of all kinds; how many ended with each status. */
export async function slippedFlags(numRuns: number, seed: number): Promise<Record<number, number>> {
  const seen: Record<number, number> = {};
  const [home, here] = [freshFolder(), process.cwd()];
  const clip = shortClip(0.02, 8000);
  const list = 'tuned circuit: { loaded Q: 40 }\n';
  process.chdir(home);
  try {
    await fc.assert(
      fc.asyncProperty(argv, async (args) => {
        for (const name of readdirSync(home)) rmSync(join(home, name), { recursive: true, force: true });
        const path = saved(home, 'clip.wav', clip);
        saved(home, 'set.yaml', list);
        saved(home, 'sweep.csv', 'Hz,dB\n100,-3\n400,0\n4000,-6\n');
        // what goes on for long is stopped, as by Ctrl-C
        let asked = 0;
        const { status, out, err }: Ran = await ran(args, () => ++asked > 3);
        seen[status] = (seen[status] ?? 0) + 1;
        expect([0, 2, 3, 130], `${JSON.stringify(args)} ${err}`).toContain(status);
        if (status === 2) expect(err).not.toBe('');
        for (const text of [out, ...texts(home)]) expect(text).not.toMatch(/\bNaN\b|\bundefined\b|-?\bInfinity\b/);
        // what was read is as it was
        expect(readFileSync(path)).toEqual(Buffer.from(clip));
        expect(readFileSync(join(home, 'set.yaml'), 'utf8')).toBe(list);
        if (existsSync(join(home, 'out'))) {
          for (const name of readdirSync(join(home, 'out'))) expect(name).not.toContain('unfinished');
        }
      }),
      { numRuns, seed },
    );
  } finally {
    process.chdir(here);
    rmSync(home, { recursive: true, force: true });
  }
  return seen;
}
