// Bundles the listening page's program: the page's own script, the engine's worker, the player, and the style sheet.
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { gzipSync } from 'node:zlib';
import { build } from 'esbuild';

const root = fileURLToPath(new URL('../../', import.meta.url));

async function bundled(...path) {
  const { outputFiles } = await build({
    entryPoints: [join(root, 'src', ...path)],
    bundle: true,
    write: false,
    platform: 'browser',
    format: 'iife',
    target: 'es2022',
    minify: true,
    // the page is one file that may be edited, mailed and published: no letter in it depends on an encoding
    charset: 'ascii',
    legalComments: 'none',
    logLevel: 'warning',
  });
  const { text } = outputFiles[0];
  // a script element ends at the first of these, wherever it stands
  return text.replaceAll(/<(?=\/script|!--|script)/gi, '\\x3C').trimEnd();
}

/** The texts that the command puts into every page. */
export async function pageScripts() {
  const [client, worker, player, css] = await Promise.all([
    bundled('page', 'client', 'main.ts'),
    bundled('worker', 'entry.ts'),
    bundled('page', 'player', 'entry.ts'),
    readFile(join(root, 'src', 'page', 'page.css'), 'utf8'),
  ]);
  // the engine is most of the page: packed it is a third
  return {
    client,
    worker: gzipSync(worker, { level: 9 }).toString('base64'),
    player,
    style: css.replaceAll(/\s*\n\s*/g, ' ').trim(),
  };
}

/** An esbuild plugin that puts the page's program in the place of the stub. */
export const withPage = {
  name: 'page-scripts',
  setup(command) {
    command.onLoad({ filter: /stubs[/\\]page-scripts\.ts$/ }, async () => ({
      contents: `export const PAGE_SCRIPTS = ${JSON.stringify(await pageScripts())};`,
      loader: 'js',
    }));
  },
};
