// Bundles the benchmark as the command is bundled, so that it times what people run, and runs it.
import { spawnSync } from 'node:child_process';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';

const root = fileURLToPath(new URL('../../', import.meta.url));
const run = (...args) => {
  const { status } = spawnSync(process.execPath, args, { cwd: root, stdio: 'inherit' });
  if (status !== 0) process.exit(status ?? 1);
};
run(join(root, 'tests', 'tools', 'build.mjs'));
const outfile = join(root, 'out', 'bench.mjs');
await build({
  entryPoints: [join(root, 'tests', 'bench', 'bench.ts')],
  outfile,
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  logLevel: 'warning',
  // found in node_modules: out/ lies within the project
  external: ['web-audio-api'],
  banner: {
    js: 'import { createRequire as presolderRequire } from "node:module"; const require = presolderRequire(import.meta.url);',
  },
});
run(outfile, ...process.argv.slice(2));
