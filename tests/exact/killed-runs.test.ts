import { spawn } from 'node:child_process';
import { readdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { freshFolder, listing, ran, saved, shortClip } from './command-run.ts';
import { builtCommand, ended, killedRuns } from './killed-runs.ts';

const LIST = 'tuned circuit: { loaded Q: 40 }\n';

describe('a render that is killed', () => {
  it('at eight moments leaves one whole set each time, clip and list untouched', async () => {
    const { faults, killed, before, after, aside } = await killedRuns(8);
    expect(faults).toEqual([]);
    expect(before + after + aside).toBe(8);
    // most were hit before they were through, else nothing was tried
    expect(killed).toBeGreaterThan(3);
  });
});

describe('Ctrl-C', () => {
  it('is heard while a variant renders, between its blocks', async () => {
    const folder = freshFolder();
    try {
      // 60 s are some hundred blocks
      const clip = saved(folder, 'clip.wav', shortClip(60, 8000));
      const list = saved(folder, 'set.yaml', LIST);
      const before = listing(folder);
      let asked = 0;
      let pressed = false;
      const stop = (): boolean => {
        // as a signal comes: not by the render's own doing, but when it lets other work in
        if (++asked === 2) setTimeout(() => (pressed = true), 0);
        return pressed;
      };
      const { status, err } = await ran(['render', clip, list, '--out', join(folder, 'out')], stop);
      expect([status, err]).toEqual([130, 'Stopped; nothing was written.\n']);
      expect(asked).toBeLessThan(90);
      expect(listing(folder)).toEqual(before);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });

  it('ends the command with 130 and leaves nothing', async () => {
    // there no process can send another one the signal
    if (process.platform === 'win32') return;
    const folder = freshFolder();
    try {
      const command = builtCommand(folder);
      const clip = saved(folder, 'clip.wav', shortClip(300, 8000));
      const list = saved(folder, 'set.yaml', LIST);
      const argv = [command, 'render', clip, list, '--bypass', '47p,100p,220p', '--out', join(folder, 'out')];
      const child = spawn(process.execPath, argv, { stdio: 'ignore' });
      const end = ended(child);
      // well into the work: three times five minutes of sound take far longer
      setTimeout(() => child.kill('SIGINT'), 2500);
      expect(await end).toBe(130);
      expect(readdirSync(folder).sort()).toEqual(['build', 'clip.wav', 'set.yaml']);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});
