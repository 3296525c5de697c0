// Installs once, builds, and renders the sample: one command on a fresh clone.
import { spawnSync } from 'node:child_process';
import { existsSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('../../', import.meta.url));
const run = (command, args, shell = false) => {
  const { status, error } = spawnSync(command, args, { cwd: root, stdio: 'inherit', shell });
  if (error) throw error;
  if (status !== 0) process.exit(status ?? 1);
};

const lock = join(root, 'package-lock.json');
const installed = join(root, 'node_modules', '.package-lock.json');
const current = existsSync(installed) && statSync(installed).mtimeMs >= statSync(lock).mtimeMs;
// npm is a shell script on Windows, so it needs the shell there
if (!current) run('npm', ['ci'], process.platform === 'win32');
run(process.execPath, [join(root, 'tests', 'tools', 'build.mjs')]);
run(process.execPath, [
  join(root, 'out', 'build', 'presolder.mjs'),
  'render',
  join(root, 'samples', 'speech.wav'),
  join(root, 'samples', 'first-one-tube-set.yaml'),
  '--out',
  join(root, 'out', 'demo'),
]);
