import { createHash } from 'node:crypto';
import { mkdtempSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Io } from '../../src/cli/io.ts';
import { run } from '../../src/cli/run.ts';
import { plainWav, u16 } from './wav-crafting.ts';

export interface Ran {
  readonly status: number;
  readonly out: string;
  readonly err: string;
}

/** Runs the command with its texts caught; `stop` is asked as often as the command asks whether to stop. */
export async function ran(
  argv: readonly string[],
  stop: () => boolean = () => false,
  talkIsTerminal = false,
): Promise<Ran> {
  let out = '';
  let err = '';
  const io: Io = {
    out: (text) => {
      out += text;
    },
    err: (text) => {
      err += text;
    },
    talkIsTerminal,
    stopRequested: stop,
  };
  const status = await run(argv, io);
  return { status, out, err };
}

/** A folder of its own under the system's place for passing files. */
export function freshFolder(): string {
  return mkdtempSync(join(tmpdir(), 'presolder-test-'));
}

/** Every file and folder below, with a digest of each file: equal listings, nothing written. */
export function listing(folder: string): string[] {
  return readdirSync(folder, { recursive: true })
    .map((name) => {
      const path = join(folder, String(name));
      if (statSync(path).isDirectory()) return `${name}/`;
      return `${name} ${createHash('sha256').update(readFileSync(path)).digest('hex')}`;
    })
    .sort();
}

/** Saves a file in a folder and gives its path. */
export function saved(folder: string, name: string, contents: string | Uint8Array): string {
  const path = join(folder, name);
  writeFileSync(path, contents);
  return path;
}

/** A clip with low and high tones, of a length that ends with no block: 16-bit mono at 48 kHz unless told. */
export function shortClip(seconds = 0.5, rate = 48_000): Uint8Array {
  const samples = Array.from({ length: Math.round(seconds * rate) }, (_, n) => {
    const t = n / rate;
    const value = 0.4 * Math.sin(2 * Math.PI * 300 * t) + 0.3 * Math.sin(2 * Math.PI * 4000 * t);
    return Math.round(32_767 * value * Math.min(1, 50 * t)) & 0xffff;
  });
  return plainWav({ rate }, samples.flatMap(u16));
}
