import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';
import { expect, it } from 'vitest';

it('takes no memory while it renders, by any path', async () => {
  const { outputFiles } = await build({
    entryPoints: [fileURLToPath(new URL('./counted-render.ts', import.meta.url))],
    bundle: true,
    platform: 'node',
    format: 'esm',
    write: false,
    logLevel: 'silent',
  });
  const { stdout, stderr, status } = spawnSync(process.execPath, ['--expose-gc', '--input-type=module', '-'], {
    input: outputFiles[0]!.text,
    encoding: 'utf8',
  });
  expect(status, stderr).toBe(0);
  const { steps, ...bytes } = JSON.parse(stdout) as Record<string, number>;
  for (const [path, taken] of Object.entries(bytes)) {
    // one number boxed in every step would be 12 bytes a step or more; the runtime itself takes a few kilobytes a round
    expect(taken / steps!, path).toBeLessThan(1);
  }
});
