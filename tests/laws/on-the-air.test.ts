import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { magnitude } from '../../src/engine/circuits/complex.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { rootMeanSquare, takenApart } from '../../src/engine/measure/apart.ts';
import { harmonics } from '../../src/engine/measure/harmonics.ts';
import { keyedTone } from '../../src/engine/measure/keyed-tone.ts';
import { type AirRender, renderOnAir } from '../../src/engine/renderer/render-on-air.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { keyedCarrier } from '../../src/engine/station/morse.ts';
import type { OnTheAir } from '../../src/engine/station/on-the-air.ts';
import { gridLeak, stiff } from './grid-leak-circuit.ts';

const RATE = 48_000;
const LEVEL = 0.05;
/** A tuned circuit so broad that it leaves the envelope alone: half its width is the carrier itself. */
const BROAD = stiff(0.5);
/** A square law is followed by linear parts only, so sums of envelopes can be worked out by hand. */
const square = (tunedCircuit = BROAD): DetectorCircuit =>
  gridLeak({ law: 'square', tunedCircuit, levelVoltsRms: LEVEL });
const NOTHING: OnTheAir = { secondStation: null, noise: null, statics: null, beatOscillator: null, seed: 1 };
/** Largest difference to the arithmetic, dB: as asked of two stations through a square law. */
const DECIBELS = 0.1;

/** A tone with soft ends, so that band limits leave its peak alone. */
const tone = (hertz: number, frames: number): Float64Array =>
  Float64Array.from({ length: frames }, (_, n) => {
    const soft = Math.min(1, n / 2400, (frames - n) / 2400);
    return soft * Math.sin((2 * Math.PI * hertz * n) / RATE);
  });

/** Peak volts at multiples of 100 Hz in the stretch from 0.1 s to 0.2 s. */
const spectrum = (volts: Float64Array): Float64Array => harmonics(volts.slice(4800, 9600), 10, 200).amplitudes;
const apartDecibels = (volts: number, expected: number): number => Math.abs(20 * Math.log10(volts / expected));

async function received(
  circuit: DetectorCircuit,
  air: Partial<OnTheAir>,
  more: { modulation?: Float64Array; other?: Float64Array; before?: number } = {},
): Promise<AirRender> {
  return renderOnAir(restPoint(circuit), new TableStore(), {
    air: { ...NOTHING, ...air },
    otherClip: more.other ? { samples: more.other, rateHertz: RATE } : null,
    modulation: more.modulation ?? new Float64Array(9600),
    before: more.before ?? 0,
    clipRateHertz: RATE,
    quality: 'normal',
    // ten times the slowest time constant here, the coupling capacitor's 5 ms
    leadSeconds: 0.05,
  });
}

describe('two stations through a square law', () => {
  // |1 + m₁c₁ + r(1 + m₂c₂)e^jΩt|² holds, as peaks: at f₁ 2m₁, at f₂ 2r²m₂, at Ω 2r, at Ω ± f₁ r·m₁, at Ω ± f₂ r·m₂,
  // at 2f₁ m₁²/2 and at 2f₂ r²m₂²/2. Modulation m alone gives 2m at its frequency: the response there times half of each
  const [m1, m2, r, f1, f2, whistle] = [0.5, 0.8, 0.3, 400, 700, 5000];
  const secondStation = {
    offsetHertz: whistle,
    levelVoltsRms: r * LEVEL,
    modulation: m2,
    channelLimit: '9 kHz',
  } as const;

  it('gives each product at its level, and nothing else', async () => {
    const circuit = square();
    const modulation = tone(f1, 14_400).map((value) => m1 * value);
    const { clip } = await received(circuit, { secondStation }, { modulation, other: tone(f2, RATE / 2) });
    const found = spectrum(clip.volts);
    const response = new LinearResponse(restPoint(circuit));
    const products: Record<number, number> = {
      [f1]: 2 * m1,
      [f2]: 2 * r * r * m2,
      [whistle]: 2 * r,
      [whistle - f1]: r * m1,
      [whistle + f1]: r * m1,
      [whistle - f2]: r * m2,
      [whistle + f2]: r * m2,
      [2 * f1]: m1 ** 2 / 2,
      [2 * f2]: (r * m2) ** 2 / 2,
    };
    for (const [hertz, size] of Object.entries(products)) {
      const expected = (magnitude(response.at(Number(hertz)).output) * size) / 2;
      expect(apartDecibels(found[Number(hertz) / 100]!, expected), `${hertz} Hz`).toBeLessThan(DECIBELS);
    }
    // what the arithmetic does not name is a thousandth of the whistle at most: Ω ± f₁ ± f₂ aside, which are named next
    const named = new Set(Object.keys(products).map(Number));
    for (const a of [f1, -f1]) for (const b of [f2, -f2]) named.add(whistle + a + b);
    found.forEach((volts, k) => {
      if (k > 0 && !named.has(100 * k)) expect(volts / found[whistle / 100]!, `${100 * k} Hz`).toBeLessThan(1e-3);
    });
  });

  it.each([9000, -9000, 3000])('whistles at an offset of %d Hz, on either side alike', async (offsetHertz) => {
    const circuit = square();
    const { clip, aloneVolts } = await received(circuit, { secondStation: { ...secondStation, offsetHertz } });
    const expected = magnitude(new LinearResponse(restPoint(circuit)).at(Math.abs(offsetHertz)).output) * r;
    expect(apartDecibels(spectrum(clip.volts)[Math.abs(offsetHertz) / 100]!, expected)).toBeLessThan(DECIBELS);
    // a carrier alone leaves the stage at rest; 1e-9: the solver's last digits
    expect(rootMeanSquare(aloneVolts as Float64Array)).toBeLessThan(1e-9);
  });

  it.each([
    [50, 9000],
    [200, 9000],
    [200, -9000],
  ])('loaded Q %d takes off a station %d Hz away by its pole, 1/√(1 + (2QΔf/f₀)²)', async (loadedQ, offsetHertz) => {
    const at = async (circuit: DetectorCircuit): Promise<number> => {
      const { clip } = await received(circuit, { secondStation: { ...secondStation, offsetHertz } });
      return spectrum(clip.volts)[90]!;
    };
    const pole = 1 / Math.hypot(1, (2 * loadedQ * 9000) / 1e6);
    expect(apartDecibels((await at(square(stiff(loadedQ)))) / (await at(square())), pole)).toBeLessThan(DECIBELS);
  });

  it('a station 30 kHz off is heard by its programme alone, its sidebands as the pole leaves them', async () => {
    const other = { offsetHertz: 30_000, levelVoltsRms: LEVEL, modulation: m2, channelLimit: '9 kHz' } as const;
    const circuit = square(stiff(100));
    const { clip } = await received(circuit, { secondStation: other }, { other: tone(400, RATE / 2) });
    // pole 1/(1 + jx), x = 2QΔf/f₀; the square of P₀ + (m/2)(P₊e^jωt + P₋e^−jωt) has (m/2)(P₊P₀* + P₀P₋*)e^jωt
    const pole = (hertz: number): [number, number] => {
      const x = (2 * 100 * hertz) / 1e6;
      return [1 / (1 + x * x), -x / (1 + x * x)];
    };
    const times = ([a, b]: [number, number], [c, d]: [number, number]): [number, number] => [
      a * c + b * d,
      b * c - a * d,
    ];
    const [above, middle, below] = [pole(30_400), pole(30_000), pole(29_600)];
    const [p, q] = [times(above, middle), times(middle, below)];
    const size = m2 * Math.hypot(p[0] + q[0], p[1] + q[1]);
    // the broad circuit's response: the pole of the wanted carrier is in none of this
    const expected = (magnitude(new LinearResponse(restPoint(square())).at(400).output) * size) / 2;
    expect(apartDecibels(spectrum(clip.volts)[4]!, expected)).toBeLessThan(DECIBELS);
  });

  it('wanted and unwanted audio are told apart: the square law takes nothing from the wanted', async () => {
    const modulation = tone(f1, 14_400).map((value) => m1 * value);
    const { clip, aloneVolts } = await received(square(), { secondStation }, { modulation });
    const { gain, rest } = takenApart(clip.volts, aloneVolts as Float64Array);
    // 1e-4: what chance could have in common; here all tones fit, so only the soft ends are left of it
    expect(Math.abs(gain - 1)).toBeLessThan(1e-4);
    const left = spectrum(rest);
    expect(left[f1 / 100]! / left[whistle / 100]!).toBeLessThan(1e-3);
  });
});

describe('noise', () => {
  it('comes out as the response passes what is in phase with the carrier', async () => {
    const frames = 2 * RATE;
    const noise = { levelVoltsRms: LEVEL / 200, bandHertz: 10_000 };
    const circuit = square();
    const of = (seed: number) => received(circuit, { noise, seed }, { modulation: new Float64Array(frames) });
    const { clip } = await of(1);
    const response = new LinearResponse(restPoint(circuit));
    // in phase, each Hz of audio holds twice the density of one part: (1/200)²/10 kHz · ½ · 2
    let power = 0;
    const step = 50;
    for (let hertz = step / 2; hertz < 18_000; hertz += step) {
      power += magnitude(response.at(hertz).output) ** 2 * (1 / 200) ** 2 * (step / 10_000);
    }
    // 5 %: the noise audio is some 1.5 kHz wide, so 2 s of it have a power uncertain by 1/√3000 and an rms by 0.9 %,
    // and at 26 dB under the carrier its own square adds 0.3 %
    expect(Math.abs(rootMeanSquare(clip.volts) / Math.sqrt(power) - 1)).toBeLessThan(0.05);
  });

  it('is the same for the same seed', async () => {
    const of = async (seed: number): Promise<Float64Array> =>
      (
        await received(
          square(),
          { noise: { levelVoltsRms: 1e-3, bandHertz: 1e4 }, seed },
          { modulation: new Float64Array(1000) },
        )
      ).clip.volts;
    const first = await of(1);
    expect(await of(1)).toEqual(first);
    expect(await of(2)).not.toEqual(first);
  });
});

describe('Morse by heterodyne', () => {
  const beatOscillator = { pitchHertz: 800, levelVoltsRms: 2 * LEVEL };
  const modulation = keyedCarrier({ text: 'A', wordsPerMinute: 20, edgeSeconds: 5e-3 }, RATE, 'text').map(
    (value) => value - 1,
  );

  it('has the tone that a square law gives, and the edge that was sent', async () => {
    const circuit = square();
    const { clip, aloneVolts } = await received(circuit, { beatOscillator }, { modulation, before: -1 });
    expect(aloneVolts).toBeNull();
    const { voltsRms, riseSeconds, bandwidthHertz } = keyedTone(clip.volts, 800, RATE);
    // |k + b·e^jΩt|² has 2kb at Ω: as modulation of depth b would
    const expected = (magnitude(new LinearResponse(restPoint(circuit)).at(800).output) * 2) / Math.SQRT2;
    expect(apartDecibels(voltsRms, expected)).toBeLessThan(DECIBELS);
    // 10 to 90 % of a raised cosine is 0.590 of it; 4 %: how its outline is followed, taken off as squares
    expect(Math.abs((riseSeconds as number) / (0.5903 * 5e-3) - 1)).toBeLessThan(0.04);
    // dots of 60 ms: a square wave of 8.3 Hz with 99 % within its 20th harmonic or so, sharpened no further by 5 ms
    expect(bandwidthHertz).toBeGreaterThan(2 * 8.3);
    expect(bandwidthHertz).toBeLessThan(40 * 8.3);
  });

  it('a tube follows the key from nothing and back, every step settled', async () => {
    const circuit = gridLeak({ levelVoltsRms: LEVEL, tunedCircuit: { ...stiff(60) } });
    const { clip } = await received(circuit, { beatOscillator }, { modulation, before: -1 });
    expect(clip.unsettledSteps).toBe(0);
    const { voltsRms } = keyedTone(clip.volts, 800, RATE);
    expect(voltsRms).toBeGreaterThan(1e-3);
    // the word space before the first mark: no tone there, and the oscillator came on before the clip began
    expect(rootMeanSquare(clip.volts.slice(0, 9600))).toBeLessThan(0.02 * voltsRms);
  });

  it('without an oscillator there is no tone', async () => {
    const { clip } = await received(square(), {}, { modulation, before: -1 });
    // what the key itself sounds like at 800 Hz is 30 dB and more below the tone of the square law
    const expected = magnitude(new LinearResponse(restPoint(square())).at(800).output);
    expect(keyedTone(clip.volts, 800, RATE).voltsRms).toBeLessThan(0.03 * expected);
  });
});
