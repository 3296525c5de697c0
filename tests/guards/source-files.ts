import { readdirSync, readFileSync } from 'node:fs';
import { join, relative, sep } from 'node:path';
import { fileURLToPath } from 'node:url';

export const ROOT = fileURLToPath(new URL('../../', import.meta.url));

/** All files under a folder of the project, paths from its root with `/` between. */
export function filesUnder(folder: string): string[] {
  return readdirSync(join(ROOT, folder), { withFileTypes: true, recursive: true })
    .filter((entry) => entry.isFile())
    .map((entry) => relative(ROOT, join(entry.parentPath, entry.name)).split(sep).join('/'))
    .sort();
}

export function textOf(path: string): string {
  return readFileSync(join(ROOT, path), 'utf8');
}

/** What a file imports: relative ones resolved from the project's root, packages as they are named. */
export function importsOf(path: string): string[] {
  const found = textOf(path).matchAll(
    /(?:^|\n)(?:import|export)\s(?:[^'"]*?\sfrom\s)?'([^']+)'|\bimport\('([^']+)'\)/g,
  );
  return [...found].map((match) => {
    const name = match[1] ?? match[2] ?? '';
    if (!name.startsWith('.')) return name;
    const parts = path.split('/').slice(0, -1);
    for (const part of name.split('/')) {
      if (part === '..') parts.pop();
      else if (part !== '.') parts.push(part);
    }
    return parts.join('/');
  });
}
