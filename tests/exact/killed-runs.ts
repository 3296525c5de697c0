import { type ChildProcess, spawn, spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, rmSync, watch } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { seededNumbers } from '../laws/seeded-numbers.ts';
import { freshFolder, saved, shortClip } from './command-run.ts';

const root = fileURLToPath(new URL('../../', import.meta.url));

/** The command as it ships, built into a folder of its own. */
export function builtCommand(folder: string): string {
  const built = spawnSync(process.execPath, [join(root, 'tests', 'tools', 'build.mjs'), join(folder, 'build')], {
    encoding: 'utf8',
  });
  if (built.status !== 0) throw new Error(built.stderr);
  return join(folder, 'build', 'presolder.mjs');
}

export function started(command: string, argv: readonly string[]): ChildProcess {
  return spawn(process.execPath, [command, ...argv], { stdio: 'ignore' });
}

/** Waits for a process to end: its status, or the signal that ended it. */
export function ended(child: ChildProcess): Promise<number | string> {
  return new Promise((resolve) => child.once('exit', (status, signal) => resolve(status ?? signal ?? 'nothing')));
}

/** The visible files of a folder with their digests; null where there is none. */
function seen(folder: string): string | null {
  if (!existsSync(folder)) return null;
  return readdirSync(folder)
    .sort()
    .map((name) => `${name} ${digest(join(folder, name))}`)
    .join('\n');
}
function digest(path: string): string {
  return createHash('sha256').update(readFileSync(path)).digest('hex');
}

export interface Killed {
  /** Runs ended by the signal; the rest were through before it came. */
  killed: number;
  /** After how many of the signals the place held the set before, the new one, or none. */
  before: number;
  after: number;
  aside: number;
  /** What was not as it should be. */
  readonly faults: string[];
}

/**
 * Kills a render again and again, at moments spread over its length and around its writing, and looks at what is left.
 * The runs are alternately of two settings, so that the set before and the new one can be told apart.
 */
export async function killedRuns(count: number): Promise<Killed> {
  const folder = freshFolder();
  try {
    const command = builtCommand(folder);
    const clip = saved(folder, 'clip.wav', shortClip(0.1, 8000));
    const list = saved(folder, 'set.yaml', 'tuned circuit: { loaded Q: 40 }\n');
    const inputs = (): string => `${digest(clip)} ${digest(list)}`;
    const [out, untouched] = [join(folder, 'results'), inputs()];
    const place = join(out, 'set');
    const argv = (setting: number): string[] => [
      'render',
      clip,
      list,
      '--out',
      place,
      '--quiet',
      '--bypass',
      ['100p', '220p'][setting] as string,
    ];
    const sets: (string | null)[] = [];
    let length = 0;
    for (const setting of [0, 1]) {
      const begun = performance.now();
      const status = await ended(started(command, argv(setting)));
      if (status !== 0) throw new Error(`the run itself ended with ${status}`);
      length = performance.now() - begun;
      sets.push(seen(place));
    }
    if (sets[0] === sets[1]) throw new Error('the two sets are alike');
    const tally: Killed = { killed: 0, before: 0, after: 0, aside: 0, faults: [] };
    const next = seededNumbers(77);
    let standing = 1;
    for (let k = 0; k < count; k++) {
      const setting = 1 - standing;
      const child = started(command, argv(setting));
      // every second one around its writing, which is short: from the moment its folder appears
      const whenWriting = k % 2 === 1;
      const share = next();
      const kill = (): boolean => child.kill('SIGKILL');
      const watcher = whenWriting
        ? watch(out, () => {
            setTimeout(kill, 30 * share);
          })
        : null;
      const timer = whenWriting ? null : setTimeout(kill, share * length);
      const end = await ended(child);
      if (timer) clearTimeout(timer);
      watcher?.close();
      if (end === 'SIGKILL') tally.killed++;
      else if (end !== 0) tally.faults.push(`run ${k} ended with ${end}`);
      const left = seen(place);
      if (left === sets[standing]) tally.before++;
      else if (left === sets[setting]) {
        tally.after++;
        standing = setting;
      } else if (left === null) {
        tally.aside++;
        // the next run, whatever it makes itself, begins by putting the old set back
        const status = await ended(started(command, [...argv(setting), '--tube', 'no such tube']));
        if (status !== 2) tally.faults.push(`the run after ${k} ended with ${status}`);
        const whole = await ended(started(command, argv(setting)));
        if (whole !== 0 || seen(place) !== sets[setting]) tally.faults.push(`nothing whole after ${k}`);
        standing = setting;
      } else tally.faults.push(`run ${k} left half a set: ${left}`);
      if (inputs() !== untouched) tally.faults.push(`run ${k} touched clip or list`);
      const others = readdirSync(out).filter((name) => name !== 'set' && !name.startsWith('.presolder-unfinished-'));
      if (others.length > 0) tally.faults.push(`run ${k} left ${others.join()}`);
    }
    // whatever was left behind hinders no run
    if ((await ended(started(command, argv(0)))) !== 0) tally.faults.push('the last run did not end well');
    if (seen(place) !== sets[0]) tally.faults.push('the last set is not whole');
    if (readdirSync(out).some((name) => name.includes('-old'))) tally.faults.push('a set was left aside');
    return tally;
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
