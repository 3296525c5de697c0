// Builds what ships: the command as one file, the worker it starts on other threads, and the audio-thread processor for
// browsers. Another folder than out/build may be named.
import { readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';
import { withPage } from './page-scripts.mjs';

const root = fileURLToPath(new URL('../../', import.meta.url));
const out = process.argv[2] ?? join(root, 'out', 'build');

// web-audio-api brings a sound-card addon and decoders under other licences; the command carries neither
const noCodec = join(root, 'src', 'cli', 'stubs', 'no-codec.ts');
const stubs = { '@audio/speaker': join(root, 'src', 'cli', 'stubs', 'no-speaker.ts') };
for (const codec of [
  'aac',
  'ac3',
  'amr',
  'ape',
  'avi',
  'dsd',
  'dts',
  'eac3',
  'mod',
  'mp4',
  'mpc',
  'tta',
  'wavpack',
  'webm',
  'wma',
]) {
  stubs[`@audio/decode-${codec}`] = noCodec;
}

await rm(out, { recursive: true, force: true });
const { metafile } = await build({
  metafile: true,
  entryPoints: {
    presolder: join(root, 'src', 'cli', 'main.ts'),
    worker: join(root, 'src', 'cli', 'worker', 'entry.ts'),
  },
  outdir: out,
  outExtension: { '.js': '.mjs' },
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  minify: true,
  keepNames: false,
  legalComments: 'linked',
  alias: stubs,
  plugins: [withPage],
  logLevel: 'warning',
  banner: {
    js: '#!/usr/bin/env node\nimport { createRequire as presolderRequire } from "node:module"; const require = presolderRequire(import.meta.url);',
  },
});
await build({
  entryPoints: { 'detector-worklet': join(root, 'src', 'worklet', 'entry.ts') },
  outdir: out,
  bundle: true,
  platform: 'browser',
  format: 'iife',
  target: 'es2022',
  minify: true,
  legalComments: 'none',
  logLevel: 'warning',
});

// the parts list's JSON Schema, from the definition the command checks lists with
const bundled = await build({
  entryPoints: [join(root, 'src', 'list', 'json-schema.ts')],
  bundle: true,
  platform: 'node',
  format: 'esm',
  write: false,
  logLevel: 'warning',
});
const code = Buffer.from(bundled.outputFiles[0].contents).toString('base64');
const { partsListSchema } = await import(`data:text/javascript;base64,${code}`);
await writeFile(join(out, 'parts-list.schema.json'), `${JSON.stringify(partsListSchema(), null, 2)}\n`);

// what else is in the bundles, under whose licence: their terms ask for the text to go along
const carried = new Set();
for (const input of Object.keys(metafile.inputs)) {
  const found = /^(.*node_modules\/(?:@[^/]+\/)?[^/]+)\//.exec(input.replaceAll('\\', '/'));
  if (found) carried.add(found[1]);
}
const notices = [];
for (const folder of [...carried].sort()) {
  const { name, version, license } = JSON.parse(await readFile(join(root, folder, 'package.json'), 'utf8'));
  const files = await readdir(join(root, folder));
  const file = files.find((one) => /^(licen[cs]e|copying)/i.test(one));
  const text =
    file === undefined ? '(the package carries no text of its own)' : await readFile(join(root, folder, file), 'utf8');
  notices.push(`${name} ${version}, ${license}\n\n${text.trim()}\n`);
}
await writeFile(join(out, 'licences.txt'), `${notices.join('\n----\n\n')}`);
