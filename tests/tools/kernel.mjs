// Compiles the renderer's kernel and writes its bytes as a source file, so that one bundle carries it everywhere.
// With --check it only says whether the kept bytes are those of the source.
import { readFile, writeFile } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
import asc from 'assemblyscript/asc';

const folder = new URL('../../src/engine/renderer/kernel/', import.meta.url);

export async function compileKernel() {
  let bytes = null;
  const { error, stderr } = await asc.main(
    [
      'stage.ts',
      '--runtime',
      'stub',
      '--optimizeLevel',
      '3',
      '--shrinkLevel',
      '0',
      '--noAssert',
      '--importMemory',
      '--enable',
      'simd',
      '--outFile',
      'k.wasm',
    ],
    {
      readFile: async (name) => {
        try {
          return await readFile(new URL(name, folder), 'utf8');
        } catch {
          return null;
        }
      },
      writeFile: (name, contents) => {
        if (name.endsWith('.wasm')) bytes = contents;
      },
      listFiles: () => [],
    },
  );
  if (error) throw new Error(`${error.message}\n${stderr.toString()}`);
  const lines = Buffer.from(bytes)
    .toString('base64')
    .match(/.{1,100}/g);
  return (
    '// Made by tests/tools/kernel.mjs from stage.ts; not edited by hand. A test compiles it again and compares.\n' +
    `export const KERNEL_BASE64 =\n  '${lines.join("' +\n  '")}';\n`
  );
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const text = await compileKernel();
  const file = new URL('code.ts', folder);
  if (process.argv.includes('--check')) process.exitCode = (await readFile(file, 'utf8')) === text ? 0 : 1;
  else await writeFile(file, text);
}
