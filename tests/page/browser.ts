import { existsSync } from 'node:fs';
import { delimiter, join } from 'node:path';
import { type Browser, chromium } from 'playwright-core';

/** Names under which the browser that these tests drive is installed. */
const NAMES = ['chromium', 'chromium-browser', 'google-chrome', 'google-chrome-stable', 'chrome', 'msedge'];
const PLACES = [
  '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
  '/Applications/Chromium.app/Contents/MacOS/Chromium',
  'C:\\Program Files\\Google\\Chrome\\Application\\chrome.exe',
  'C:\\Program Files (x86)\\Microsoft\\Edge\\Application\\msedge.exe',
];

/** The program of a browser on this machine; `BROWSER_PROGRAM` names another. Null: there is none. */
export function browserProgram(): string | null {
  const named = process.env.BROWSER_PROGRAM;
  if (named) return existsSync(named) ? named : null;
  const folders = (process.env.PATH ?? '').split(delimiter);
  const endings = process.platform === 'win32' ? ['.exe'] : [''];
  const inPath = folders.flatMap((folder) => NAMES.flatMap((name) => endings.map((end) => join(folder, name + end))));
  return [...inPath, ...PLACES].find((path) => existsSync(path)) ?? null;
}

export const HOW_TO_GET_ONE =
  'The page tests did not run: no Chromium or Chrome was found. Install one (Debian: apt-get install chromium), or name ' +
  'its program in BROWSER_PROGRAM, and run npm test again.';

/** Whether page tests must run: on the build machine a test that did not run is a failure. */
export const MUST_RUN = process.env.CI !== undefined && process.env.CI !== '' && process.env.CI !== '0';

export function launch(program: string): Promise<Browser> {
  return chromium.launch({
    executablePath: program,
    // as in a container, where shared memory is small and there is no sound card
    args: ['--disable-dev-shm-usage', '--mute-audio'],
  });
}
