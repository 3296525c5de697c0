import { spawn } from 'node:child_process';
import { resolve } from 'node:path';

/** The program by which each system opens a file with whatever is meant for it; no shell reads the file's name. */
function opener(platform: NodeJS.Platform): string {
  if (platform === 'darwin') return 'open';
  return platform === 'win32' ? 'explorer.exe' : 'xdg-open';
}

/**
 * Opens a file with the system's browser and does not wait for it.
 *
 * @returns null, or why it could not be opened, which is never more than a note: the file is there
 */
export function openPage(file: string, platform: NodeJS.Platform = process.platform): Promise<string | null> {
  const program = opener(platform);
  return new Promise((done) => {
    const child = spawn(program, [resolve(file)], { detached: true, stdio: 'ignore' });
    child.once('error', (fault) => done(`${program}: ${fault.message}`));
    child.once('spawn', () => {
      child.unref();
      done(null);
    });
  });
}
