import { readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { filesUnder, ROOT, textOf } from './source-files.ts';

interface PackageFile {
  readonly scripts: Record<string, string>;
  readonly dependencies?: Record<string, string>;
  readonly devDependencies: Record<string, string>;
}
const packageFile = JSON.parse(textOf('package.json')) as PackageFile;
const readme = textOf('README.md');

describe('the top level', () => {
  it('holds what it should and nothing else', () => {
    const kept = readdirSync(ROOT).filter((name) => !name.startsWith('.') && name !== 'node_modules');
    const stated = [
      'package.json',
      'package-lock.json',
      'tsconfig.json',
      'README.md',
      'DEVELOPERS.md',
      'src',
      'samples',
      'tests',
      'out',
    ];
    // a packed copy may lie there while it is being tried, and is ignored
    expect(kept.filter((name) => !name.endsWith('.tgz')).sort()).toEqual(stated.sort());
  });

  it('the lock file names no download address', () => {
    expect(textOf('package-lock.json')).not.toMatch(
      /"resolved"|https?:\/\/(?!opencollective|github|www\.patreon|tidelift|polar)[^"]*registry/,
    );
  });

  it('the package needs nothing installed and runs no script on install', () => {
    expect(packageFile.dependencies ?? {}).toEqual({});
    for (const script of ['preinstall', 'install', 'postinstall', 'prepare'])
      expect(packageFile.scripts).not.toHaveProperty(script);
  });

  it('every dependency is in the reasons of DEVELOPERS.md', () => {
    const reasons = textOf('DEVELOPERS.md');
    for (const name of Object.keys(packageFile.devDependencies)) expect(reasons).toContain(`\`${name}\``);
  });
});

describe('the README', () => {
  it('names commands and flags that the program has', async () => {
    const { run } = await import('../../src/cli/run.ts');
    const helpOf = async (command: string): Promise<string> => {
      const parts: string[] = [];
      const io = {
        out: (text: string) => void parts.push(text),
        err: () => {},
        talkIsTerminal: false,
        stopRequested: () => false,
      };
      expect(await run(command === '' ? ['--help'] : [command, '--help'], io)).toBe(0);
      return parts.join('');
    };
    const whole = await helpOf('');
    const lines = readme.match(/^npx presolder .*$/gm) ?? [];
    expect(lines.length).toBeGreaterThan(6);
    for (const line of lines) {
      const command = (/^npx presolder (\w+)/.exec(line) as RegExpExecArray)[1] as string;
      expect(whole).toContain(command);
      const help = await helpOf(command);
      for (const flag of line.match(/--[a-z-]+/g) ?? []) expect(help).toContain(flag);
    }
  });

  it('names npm scripts and files that are there', () => {
    for (const [, script] of readme.matchAll(/npm run ([a-z:]+)/g))
      expect(packageFile.scripts).toHaveProperty(script as string);
    for (const [, path] of readme.matchAll(/(samples\/[\w./-]+\w)/g)) expect(filesUnder('samples')).toContain(path);
  });
});

describe('sources', () => {
  const sources = [...filesUnder('src'), ...filesUnder('tests')].filter((path) => /\.(ts|mjs)$/.test(path));
  it('no file is called after nothing in particular', () => {
    expect(sources.filter((path) => /(utils?|helpers?|misc|common)\.(ts|mjs)$/.test(path))).toEqual([]);
  });

  it('no test is switched off', () => {
    const off = new RegExp(String.raw`\b(?:it|describe|test)\.(?:ski${'p'}|onl${'y'}|tod${'o'})\b`);
    expect(sources.filter((path) => off.test(textOf(path)))).toEqual([]);
  });
});
