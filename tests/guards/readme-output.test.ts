import { describe, expect, it } from 'vitest';
import { run } from '../../src/cli/run.ts';
import { ROOT, textOf } from './source-files.ts';

/** Commands whose output the README shows, each with the lines it shows of it. */
const shown = [
  ...textOf('README.md').matchAll(
    /<!-- output: (.+?) -->\r?\n([\s\S]*?)(?=\r?\n\r?\n(?![a-zA-Z]+:|What would|variant)|$)/g,
  ),
].map(([, command, block]) => ({
  command: (command as string).split(' '),
  lines: (block as string)
    .split(/\r?\n/)
    .map((line) => line.trimEnd())
    .filter((line) => line !== '' && !line.startsWith('```')),
}));

describe('output in the README is what the program prints', () => {
  it('there is some', () => {
    expect(shown.length).toBeGreaterThan(2);
    for (const { lines } of shown) expect(lines.length).toBeGreaterThan(4);
  });

  it.each(shown)('$command', async ({ command, lines }) => {
    const printed: string[] = [];
    const io = {
      out: (text: string) => void printed.push(text),
      err: () => {},
      talkIsTerminal: false,
      stopRequested: () => false,
    };
    const home = process.cwd();
    process.chdir(ROOT);
    try {
      expect(await run([...command, '--quiet'], io)).toBe(0);
    } finally {
      process.chdir(home);
    }
    const all = printed
      .join('')
      .split('\n')
      .map((line) => line.trimEnd());
    for (const line of lines) expect(all).toContain(line);
  });
});
