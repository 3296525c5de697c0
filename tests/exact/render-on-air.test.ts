import { mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Result, VariantResult } from '../../src/results/result.ts';
import { readWav } from '../../src/results/wav-read.ts';
import { freshFolder, ran, saved, shortClip } from './command-run.ts';
import { plainWav, u16 } from './wav-crafting.ts';

let folder = '';
let clip = '';
beforeAll(() => {
  folder = freshFolder();
  clip = saved(folder, 'clip.wav', shortClip(0.3));
  mkdirSync(join(folder, 'lists'));
  // 700 Hz, which the wanted clip does not hold: what two programmes have in common cannot be told apart
  const other = Array.from({ length: 6300 }, (_, n) => Math.round(9000 * Math.sin((2 * Math.PI * 700 * n) / 44_100)));
  saved(
    join(folder, 'lists'),
    'other.wav',
    plainWav(
      { rate: 44_100 },
      other.flatMap((value) => u16(value & 0xffff)),
    ),
  );
});
afterAll(() => rmSync(folder, { recursive: true }));

/** A stiff source and a textbook law need no tables, so these runs are short. */
const STIFF = 'tuned circuit: { loaded Q: 40 }\ndetector: { law: square }\n';

async function rendered(list: string, ...argv: string[]): Promise<{ result: Result; out: string; text: string }> {
  const path = saved(join(folder, 'lists'), 'set.yaml', STIFF + list);
  const out = join(folder, 'out');
  const {
    status,
    err,
    out: printed,
  } = await ran(['render', ...argv.map((one) => (one === 'LIST' ? path : one)), '--out', out]);
  expect(err.replace(/^(Wrote|Replaced|Turn).*$/gm, '').trim()).toBe('');
  expect(status).toBe(0);
  return { result: JSON.parse(readFileSync(join(out, 'result.json'), 'utf8')) as Result, out, text: printed };
}

describe('a crowded channel', () => {
  it("reads the second station's clip beside the list; tells wanted, unwanted and whistle apart", async () => {
    const { result, out, text } = await rendered(
      `on the air: { second station: { clip: other.wav, offset: 5 kHz, level: -6 dB }, noise: -60 dB }
variants: { crowded: {}, clear: { on the air.second station: none, on the air.noise: none } }`,
      clip,
      'LIST',
    );
    const [crowded, clear] = result.variants as [VariantResult, VariantResult];
    const air = crowded.onTheAir as NonNullable<VariantResult['onTheAir']>;
    expect(air.secondStation).toMatchObject({ clip: 'other.wav', offsetHertz: 5000 });
    expect(air.whistle?.hertz).toBe(5000);
    // a square law takes nothing from the wanted station; 2 %: what 0.3 s have in common by chance
    expect(Math.abs(air.wantedVoltsRms / air.wantedAloneVoltsRms - 1)).toBeLessThan(0.02);
    expect(air.unwantedVoltsRms).toBeGreaterThan(air.whistle?.voltsRms as number);
    expect(air.wantedOverUnwantedDecibels).toBeCloseTo(20 * Math.log10(air.wantedVoltsRms / air.unwantedVoltsRms), 9);
    expect(clear.onTheAir).toBeUndefined();
    expect(readFileSync(join(out, 'response.md'), 'utf8')).toContain('### On the air');
    expect(text).toContain('wanted over unwanted');
    // both clips as long as the wanted one, at its rate
    for (const name of ['crowded', 'clear']) {
      const { frames, sampleRateHertz } = readWav(readFileSync(join(out, `${name}.wav`)), name);
      expect([frames, sampleRateHertz]).toEqual([14_400, 48_000]);
    }
  });

  it('is the same again, byte by byte, and another with another seed', async () => {
    const bytes = async (seed: number): Promise<Buffer> => {
      const list = `on the air: { noise: -20 dB, static: { level: 0 dB, crashes a second: 20 }, seed: ${seed} }\nname: a`;
      return readFileSync(join((await rendered(list, clip, 'LIST')).out, 'a.wav'));
    };
    const first = await bytes(1);
    expect((await bytes(1)).equals(first)).toBe(true);
    expect((await bytes(2)).equals(first)).toBe(false);
  });

  it('a clip that is not there is named with its path, and nothing is written', async () => {
    const path = saved(join(folder, 'lists'), 'gone.yaml', 'on the air: { second station: gone.wav }');
    const { status, err } = await ran(['render', clip, path, '--out', join(folder, 'none')]);
    expect(status).toBe(2);
    expect(err).toContain(join(folder, 'lists', 'gone.wav'));
    expect(err).toContain('no such file');
  });
});

describe('Morse', () => {
  it('needs no clip: a list with a text, and the tone is told', async () => {
    const { result, out } = await rendered(
      'on the air: { morse: { text: E, speed: 20 }, beat oscillator: 800 Hz }\nname: sent',
      'LIST',
    );
    // a dot and two word spaces of 60 ms dots
    expect(result.clip).toMatchObject({ file: 'Morse text', seconds: 0.9, sampleRateHertz: 48_000 });
    const air = result.variants[0]?.onTheAir;
    expect(air).toMatchObject({ morse: { text: 'E', wordsPerMinute: 20, edgeSeconds: 5e-3 }, tone: { hertz: 800 } });
    // 10 to 90 % of a 5 ms raised cosine is 2.95 ms; 10 %: a loaded Q of 40 at 920 kHz and the stage round it a little
    expect(Math.abs((air?.tone?.riseSeconds as number) / 2.95e-3 - 1)).toBeLessThan(0.1);
    expect(readWav(readFileSync(join(out, 'sent.wav')), 'sent').frames).toBe(43_200);
  });

  it('--morse and --speed send a text on any list, commas and all', async () => {
    const { result } = await rendered('', 'LIST', '--morse', 'T,', '--speed', '30,60');
    expect(result.variants.map(({ onTheAir }) => onTheAir?.morse)).toMatchObject([
      { text: 'T,', wordsPerMinute: 30 },
      { text: 'T,', wordsPerMinute: 60 },
    ]);
    // no oscillator, no tone
    expect(result.variants[0]?.onTheAir?.tone).toBeNull();
  });

  it('a clip can be the key', async () => {
    const { result } = await rendered(
      'on the air: { morse: { keyed by: clip }, beat oscillator: 500 Hz }',
      clip,
      'LIST',
    );
    expect(result.variants[0]?.onTheAir?.morse).toBe('clip');
    expect(result.clip?.seconds).toBe(0.3);
  });

  it.each([
    [['--morse', 'E#'], '--morse', '"#"'],
    [['--morse', 'E', '--speed', 'fast'], '--speed', 'words a minute'],
    [['--speed', '20'], 'on the air.morse.text', 'found nothing'],
    [['CLIP', '--morse', 'E'], 'clip.wav', 'a clip where a Morse text is sent'],
    [[], 'render', 'no clip'],
  ])('%j: refused', async (argv, ...named) => {
    const { status, err } = await ran(['render', ...argv.map((one) => (one === 'CLIP' ? clip : one))]);
    expect(status).toBe(2);
    for (const words of named) expect(err).toContain(words);
  });
});
