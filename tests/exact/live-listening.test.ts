import { mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { listen } from '../../src/cli/commands/listen.ts';
import { EXIT, type Io } from '../../src/cli/io.ts';
import { liveKeys } from '../../src/cli/live/live-keys.ts';
import { LivePlayer } from '../../src/cli/live/live-player.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { DetectorRenderer } from '../../src/engine/renderer/detector-renderer.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { writeWav } from '../../src/results/wav-write.ts';
import { gridLeak } from '../laws/grid-leak-circuit.ts';

const RATE = 48_000;
/** A second and a half of two tones that do not come round together. */
const CLIP = Float64Array.from(
  { length: 72_000 },
  (_, n) => 0.4 * Math.sin((2 * Math.PI * 440 * n) / RATE) + 0.3 * Math.sin((2 * Math.PI * 1234.5 * n) / RATE),
);
const tables = new TableStore();

function detector(bypassFarads: number, gain: number) {
  const rest = restPoint(gridLeak({ bypassFarads, levelVoltsRms: 0.1 }));
  return { rest, laws: tables.lawsFor(rest, 1), modulation: CLIP, gain };
}

/** The engine's own samples over the looped clip, in time with it, after long enough to have settled. */
function direct({ rest, laws, modulation, gain }: ReturnType<typeof detector>, from: number, frames: number): number[] {
  const renderer = new DetectorRenderer(rest, laws, RATE);
  const before = 48_000;
  const count = before + frames + renderer.delaySamples;
  const length = modulation.length;
  const input = Float64Array.from({ length: count }, (_, n) => modulation[(from - before + n + 2 * length) % length]!);
  const output = new Float64Array(count);
  renderer.process(input, output, count);
  return [...output.subarray(before + renderer.delaySamples)].map((value) => gain * value);
}

function play(player: LivePlayer, frames: number): number[] {
  const heard: number[] = [];
  const block = new Float32Array(128);
  for (let done = 0; done < frames; done += 128) {
    player.process(block, 128);
    heard.push(...block);
  }
  return heard.slice(0, frames);
}

// 1e-6 of full scale: single precision, and a quarter second's warming against a whole one
function expectSame(heard: readonly number[], own: readonly number[]): void {
  const off = heard.map((value, n) => Math.abs(value - own[n]!));
  expect(off.reduce((a, b) => Math.max(a, b), 0)).toBeLessThan(1e-6);
}

describe('the live player', () => {
  it('plays what the engine gives, over the end of the clip and on', () => {
    const one = detector(100e-12, 2);
    expectSame(play(new LivePlayer(one, RATE), 80_000), direct(one, 0, 80_000));
  });

  it('changes at the same instant of the programme: before, after, and no step between', () => {
    const one = detector(100e-12, 2);
    const other = detector(2.2e-9, 1.5);
    const player = new LivePlayer(one, RATE);
    const at = 128 * 90;
    const before = play(player, at);
    player.change(other);
    const after = play(player, 128 * 60);
    expectSame(before, direct(one, 0, at));
    expectSame(after.slice(480), direct(other, at, after.length).slice(480));
    // a click would be a jump between neighbours beyond what both programmes make by themselves
    const jumps = (samples: readonly number[]): number =>
      samples.slice(1).reduce((most, value, n) => Math.max(most, Math.abs(value - samples[n]!)), 0);
    const seam = [...before.slice(-200), ...after.slice(0, 700)];
    expect(jumps(seam)).toBeLessThan(1.1 * Math.max(jumps(before), jumps(after)));
  });

  it('keeps its place over a pause, silent meanwhile', () => {
    const one = detector(100e-12, 2);
    const player = new LivePlayer(one, RATE);
    const before = play(player, 1280);
    player.pause(true);
    expect(play(player, 512).every((value) => value === 0)).toBe(true);
    player.pause(false);
    expectSame([...before, ...play(player, 1280)], direct(one, 0, 2560));
  });
});

describe('keys', () => {
  it.each([
    ['1', [{ kind: 'variant', index: 0 }]],
    [
      '\u001b[A\u001b[B',
      [
        { kind: 'step', by: 1 },
        { kind: 'step', by: -1 },
      ],
    ],
    [
      '\u001bOC\u001b[D',
      [
        { kind: 'part', by: 1 },
        { kind: 'part', by: -1 },
      ],
    ],
    [' lwq', [{ kind: 'pause' }, { kind: 'match' }, { kind: 'write' }, { kind: 'quit' }]],
    ['\u0003', [{ kind: 'quit' }]],
    ['0xyz\u001b', []],
  ])('%j', (sent, keys) => {
    expect(liveKeys(sent)).toEqual(keys);
  });
});

describe('the command', () => {
  let folder = '';
  let home = '';
  beforeEach(() => {
    home = process.cwd();
    folder = mkdtempSync(join(tmpdir(), 'presolder-live-'));
    const { bytes } = writeWav({
      samples: CLIP.subarray(0, 24_000),
      sampleRateHertz: RATE,
      format: '16',
      comment: '',
      ditherSeed: 1,
    });
    writeFileSync(join(folder, 'clip.wav'), bytes);
    process.chdir(folder);
  });
  afterEach(() => {
    process.chdir(home);
    rmSync(folder, { recursive: true, force: true });
  });

  /** Runs it with keys sent at stated amounts of sound, the sound going into a stand-in output. */
  async function run(keys: readonly (readonly [number, string])[], options: Record<string, unknown> = {}) {
    const talk: string[] = [];
    const io: Io = {
      out: () => {},
      err: (text) => void talk.push(text),
      talkIsTerminal: false,
      stopRequested: () => false,
    };
    let send: (sent: string) => void = () => {};
    let bytes = 0;
    const waiting = [...keys];
    const status = await listen('clip.wav', null, { bypass: '100p,2n2', ...options }, io, {
      terminal: {
        isTerminal: true,
        listen: (onKeys) => {
          send = onKeys;
        },
        close: () => {},
      },
      output: async () => ({
        sink: (block, done) => {
          bytes += block.length;
          while (waiting[0] && bytes >= waiting[0][0] * RATE * 4) send(waiting.shift()![1]);
          setImmediate(done);
        },
        close: () => {},
      }),
    });
    return { status, talk: talk.join(''), seconds: bytes / RATE / 4 };
  }

  it('switches, steps, writes and leaves', async () => {
    const { status, talk, seconds } = await run([
      [0.05, '2'],
      [0.1, '\u001b[A'],
      [0.15, 'l'],
      [0.2, 'w'],
      [1.2, 'q'],
    ]);
    expect(status).toBe(EXIT.done);
    expect(talk).toMatch(/2 bypass 2n2/);
    expect(talk).toMatch(/bench: bypass 2n2 {2}\[bypass 2\.7 nF\]/);
    expect(talk).toMatch(/matched loudness/);
    expect(
      readdirSync(join('out', 'listen'))
        .map((name) => name.replace(/^.*\./, ''))
        .sort(),
    ).toEqual(['wav', 'yaml']);
    expect(seconds).toBeGreaterThan(1);
  });

  it('says so where there is no terminal', async () => {
    const io: Io = { out: () => {}, err: () => {}, talkIsTerminal: false, stopRequested: () => false };
    const terminal = { isTerminal: false, listen: () => {}, close: () => {} };
    const output = () => Promise.reject(new Error('not to be asked'));
    await expect(listen('clip.wav', null, {}, io, { terminal, output })).rejects.toMatchObject({
      faults: [{ code: 'no-terminal' }],
    });
  });
});
