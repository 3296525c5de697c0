import { execFileSync } from 'node:child_process';
import { mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { ROOT } from '../guards/source-files.ts';

/** A command built apart from the shipped one, with a folder for what it makes. */
export interface BuiltCommand {
  readonly folder: string;
  /** Runs the command; raises when it does not end with status 0. */
  run(...argv: readonly string[]): string;
}

export function buildCommand(): BuiltCommand {
  const folder = mkdtempSync(join(tmpdir(), 'presolder-page-'));
  const out = join(folder, 'build');
  execFileSync(process.execPath, [join(ROOT, 'tests', 'tools', 'build.mjs'), out]);
  return {
    folder,
    run: (...argv) =>
      execFileSync(process.execPath, [join(out, 'presolder.mjs'), ...argv], { cwd: folder, encoding: 'utf8' }),
  };
}

/** Seeded noise and tones as a 16-bit mono WAV file: a programme without two moments alike. */
export function noisyClip(path: string, seconds: number, rate = 48_000): void {
  const frames = Math.round(seconds * rate);
  const bytes = Buffer.alloc(44 + 2 * frames);
  bytes.write('RIFF', 0);
  bytes.writeUInt32LE(36 + 2 * frames, 4);
  bytes.write('WAVEfmt ', 8);
  bytes.writeUInt32LE(16, 16);
  bytes.writeUInt16LE(1, 20);
  bytes.writeUInt16LE(1, 22);
  bytes.writeUInt32LE(rate, 24);
  bytes.writeUInt32LE(2 * rate, 28);
  bytes.writeUInt16LE(2, 32);
  bytes.writeUInt16LE(16, 34);
  bytes.write('data', 36);
  bytes.writeUInt32LE(2 * frames, 40);
  let state = 12_345;
  let low = 0;
  for (let n = 0; n < frames; n++) {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    low += 0.2 * (state / 2 ** 31 - 1 - low);
    const value = 0.5 * low + 0.3 * Math.sin((2 * Math.PI * 440 * n) / rate);
    bytes.writeInt16LE(Math.round(24_000 * value), 44 + 2 * n);
  }
  writeFileSync(path, bytes);
}
