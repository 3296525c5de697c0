import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { rootMeanSquare, steadyToneRms, takenApart } from '../../src/engine/measure/apart.ts';
import { keyedTone } from '../../src/engine/measure/keyed-tone.ts';
import { renderOnAir } from '../../src/engine/renderer/render-on-air.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { keyedCarrier } from '../../src/engine/station/morse.ts';
import type { OnTheAir } from '../../src/engine/station/on-the-air.ts';
import { type ListedVariant, listVariants } from '../../src/list/variants.ts';

const RATE = 48_000;
const at = (name: string): URL => new URL(`../../samples/${name}`, import.meta.url);
const variantsOf = (name: string): ListedVariant[] => listVariants(readFileSync(at(name), 'utf8'), name);

const received = (variant: ListedVariant, air: Partial<OnTheAir>, modulation: Float64Array, before: number) =>
  renderOnAir(restPoint(variant.circuit), new TableStore(), {
    air: { ...variant.onTheAir!.air, ...air },
    otherClip: null,
    modulation,
    before,
    clipRateHertz: RATE,
    quality: 'normal',
    leadSeconds: 0.1,
  });

describe('the crowded evening', () => {
  const variants = variantsOf('crowded-evening.yaml');

  it('names a clip that lies beside it', () => {
    expect(variants.map(({ name }) => name)).toEqual(['as drawn', 'sharper coil', 'larger bypass', 'clear channel']);
    expect(variants.map(({ onTheAir }) => onTheAir?.otherClip)).toEqual(['music.wav', 'music.wav', 'music.wav', null]);
    expect(readFileSync(at('music.wav')).length).toBeGreaterThan(1000);
  });

  it('sharper coil and larger bypass take the whistle down against speech, by what anyone hears', async () => {
    // a tone of 500 Hz in place of speech, and the second station's carrier alone
    const modulation = Float64Array.from(
      { length: RATE / 5 },
      (_, n) => 0.3 * Math.sin((2 * Math.PI * 500 * n) / RATE),
    );
    const whistles: number[] = [];
    for (const variant of variants.slice(0, 3)) {
      const { clip, aloneVolts } = await received(variant, { noise: null, statics: null }, modulation, 0);
      const { rest, wantedVoltsRms } = takenApart(clip.volts, aloneVolts as Float64Array);
      whistles.push(20 * Math.log10(steadyToneRms(rest, 9000, RATE) / wantedVoltsRms));
    }
    const [drawn, sharper, bypassed] = whistles as [number, number, number];
    // 3 dB: three times the smallest step an ear notices (common practice, no source)
    expect(drawn - sharper).toBeGreaterThan(3);
    expect(drawn - bypassed).toBeGreaterThan(3);
  });
});

describe('Morse on a one-tube set', () => {
  it('a stronger oscillator makes a louder tone, and noise no louder against it', async () => {
    const found = [];
    for (const variant of variantsOf('morse.yaml')) {
      const { keying, air } = variant.onTheAir!;
      expect(keying).toMatchObject({ wordsPerMinute: 13, edgeSeconds: 5e-3 });
      const sent = keyedCarrier({ text: 'E', wordsPerMinute: 20, edgeSeconds: 5e-3 }, RATE, 'text').map(
        (value) => value - 1,
      );
      const { clip, aloneVolts } = await received(variant, {}, sent, -1);
      const { voltsRms } = keyedTone(aloneVolts as Float64Array, air.beatOscillator!.pitchHertz, RATE);
      const { rest } = takenApart(clip.volts, aloneVolts as Float64Array);
      found.push({ voltsRms, clear: voltsRms / rootMeanSquare(rest) });
    }
    const [weak, drawn, strong] = found as [(typeof found)[0], (typeof found)[0], (typeof found)[0]];
    // a square law gives the tone in proportion to the oscillator: 26 dB and 24 dB apart here, half of it at least
    expect(drawn.voltsRms / weak.voltsRms).toBeGreaterThan(10);
    expect(strong.voltsRms / drawn.voltsRms).toBeGreaterThan(8);
    // noise beats with the weak oscillator's station too; 2: 6 dB, what the list shows at least
    expect(drawn.clear / weak.clear).toBeGreaterThan(2);
    expect(strong.clear / drawn.clear).toBeGreaterThan(0.9);
  });
});
