import { describe, expect, it } from 'vitest';
import { filesUnder, importsOf, textOf } from './source-files.ts';

/** Rows of the table 'Who may import whom': folder, then what it may import besides itself. */
function allowed(): Map<string, Set<string>> {
  const text = textOf('DEVELOPERS.md');
  const table = text.slice(text.indexOf('Who may import whom'));
  const rows = new Map<string, Set<string>>();
  for (const line of table.split(/\r?\n/)) {
    const row = /^\|\s*`([^`]+)`\s*\|(.*)\|\s*$/.exec(line);
    if (row)
      rows.set(row[1] as string, new Set([...(row[2] as string).matchAll(/`([^`]+)`/g)].map((m) => m[1] as string)));
    else if (rows.size > 0 && !line.startsWith('|')) break;
  }
  return rows;
}

const table = allowed();
const folderOf = (path: string): string => {
  if (path === 'src/engine/errors.ts') return 'engine/errors.ts';
  return path.slice('src/'.length, Math.max(path.lastIndexOf('/'), 'src/'.length)) || 'src';
};

describe('who may import whom', () => {
  it('the table is there and names every folder', () => {
    const folders = new Set(
      filesUnder('src')
        .filter((path) => path.endsWith('.ts'))
        .map(folderOf),
    );
    folders.delete('engine/errors.ts');
    expect([...folders].filter((folder) => !table.has(folder))).toEqual([]);
    expect([...table.keys()].filter((folder) => !folders.has(folder))).toEqual([]);
  });

  it.each(filesUnder('src').filter((path) => path.endsWith('.ts')))('%s', (path) => {
    const folder = folderOf(path);
    const may = table.get(folder) ?? new Set<string>();
    const wrong = importsOf(path).filter((name) => {
      if (name.startsWith('node:')) return !may.has('node:');
      if (!name.startsWith('src/')) return !may.has(name) && name !== './layout';
      const to = folderOf(name);
      return to !== folder && to !== 'engine/errors.ts' && !may.has(to);
    });
    expect(wrong, `${folder} may import ${[...may].join(', ')}`).toEqual([]);
  });
});

describe('the engine is arithmetic', () => {
  it.each(filesUnder('src/engine').filter((path) => path.endsWith('.ts')))('%s', (path) => {
    const text = textOf(path).replace(/\/\*[\s\S]*?\*\/|\/\/.*$/gm, '');
    expect(text).not.toMatch(/\b(process|document|navigator|performance|console|globalThis)\.|\bDate\b|\bsetTimeout\b/);
    expect(text).not.toMatch(/Math\.random|:\s*any\b|<any>|as any\b/);
  });
});
