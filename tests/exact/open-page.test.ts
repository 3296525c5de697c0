import { chmodSync, existsSync, readFileSync, rmSync } from 'node:fs';
import { delimiter, join, resolve } from 'node:path';
import { afterEach, expect, it } from 'vitest';
import { openPage } from '../../src/cli/open-page.ts';
import { freshFolder, saved } from './command-run.ts';

const path = process.env.PATH;
afterEach(() => {
  process.env.PATH = path;
});

it('names the program that is not there, and fails no run', async () => {
  const folder = freshFolder();
  process.env.PATH = folder;
  for (const [platform, program] of [
    ['linux', 'xdg-open'],
    ['darwin', 'open'],
  ] as const) {
    expect(await openPage('page.html', platform)).toMatch(new RegExp(`^${program}: .*ENOENT`));
  }
  rmSync(folder, { recursive: true });
});

it.runIf(process.platform !== 'win32')('hands the file over as it is, without a shell', async () => {
  const folder = freshFolder();
  const said = join(folder, 'said');
  const program = saved(
    folder,
    'xdg-open',
    `#!/bin/sh\nprintf '%s' "$1" > '${said}.new' && mv '${said}.new' '${said}'\n`,
  );
  chmodSync(program, 0o755);
  process.env.PATH = `${folder}${delimiter}${path}`;
  const name = 'a page; touch harm $(touch harm).html';
  expect(await openPage(name, 'linux')).toBe(null);
  for (let turn = 0; turn < 200 && !existsSync(said); turn++) await new Promise((done) => setTimeout(done, 20));
  expect(readFileSync(said, 'utf8')).toBe(resolve(name));
  expect(existsSync('harm')).toBe(false);
  rmSync(folder, { recursive: true });
});
