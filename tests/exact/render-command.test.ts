import { readdirSync, readFileSync, rmSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { integratedLoudness } from '../../src/engine/measure/loudness.ts';
import { renderClip } from '../../src/engine/renderer/render-clip.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { programmeFrom } from '../../src/engine/station/programme.ts';
import { listVariants } from '../../src/list/variants.ts';
import type { Result } from '../../src/results/result.ts';
import { type ReadSound, readWav } from '../../src/results/wav-read.ts';
import { freshFolder, listing, ran, saved, shortClip } from './command-run.ts';
import { plainWav, u16 } from './wav-crafting.ts';

/** A stiff source, whose analysis is the quickest: what these tests hold is the same for all. */
const STIFF = 'tuned circuit: { loaded Q: 40 }\n';
const LIST = `${STIFF}variants:\n  brighter: { plate.bypass: 100p }\n  mellow: { plate.bypass: 3n3 }\n`;
/** Half a step of a 24-bit file: all that rounding may move a sample. */
const HALF_STEP = 2 ** -24;

let folder = '';
let clip = '';
/** A clip too short to measure, for runs whose sound does not matter. */
let blip = '';
let list = '';
let single = '';
const at = (name: string): string => join(folder, name);
const resultIn = (place: string): Result => JSON.parse(readFileSync(join(at(place), 'result.json'), 'utf8')) as Result;
const soundIn = (place: string, file: string): ReadSound => readWav(readFileSync(join(at(place), file)), file);
const peakOf = (sound: ReadSound): number =>
  sound.channels[0]!.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
const gain = (decibels: number): number => 10 ** (decibels / 20);

beforeAll(async () => {
  folder = freshFolder();
  clip = saved(folder, 'clip.wav', shortClip());
  blip = saved(folder, 'blip.wav', shortClip(0.02));
  list = saved(folder, 'set.yaml', LIST);
  single = saved(folder, 'single.yaml', STIFF);
  const { status, err } = await ran(['render', clip, list, '--out', at('level')]);
  expect([status, err]).toEqual([0, expect.stringContaining(at('level'))]);
});
afterAll(() => {
  rmSync(folder, { recursive: true });
});

/** Every key of a value, dotted, rows as []. */
function keysOf(value: unknown, prefix = ''): string[] {
  if (typeof value !== 'object' || value === null) return [];
  if (Array.isArray(value)) return value.flatMap((item) => keysOf(item, `${prefix}[]`));
  return Object.entries(value).flatMap(([key, item]) => [`${prefix}.${key}`, ...keysOf(item, `${prefix}.${key}`)]);
}

/** Keys of the result file as its description lists them, without the circuit's own. */
const KEYS: readonly string[] = `
.format .clip .clip.file .clip.seconds .clip.sampleRateHertz .clip.limitedSamples .fullScaleVolts .variants
.variants[].name .variants[].changes .variants[].changes.plate.bypass .variants[].circuit
.variants[].rest ${'gridVolts gridAmps gridResistanceOhms plateVolts plateAmps amplificationFactor plateResistanceOhms transconductanceSiemens stageGain plateWatts loadWatts supplyAmps inputCapacitanceFaradsAtAudio inputCapacitanceFaradsAtCarrier inputResistanceOhms carrierAtGridVoltsRms carrierOnPlateVoltsRms leakCornerHertz gridCornerHertz'.replace(/\w+/g, '.variants[].rest.$&')}
.variants[].socket ${'electrode volts readings readings[].meter readings[].meterOhms readings[].rangeVolts readings[].volts'.replace(/[\w[\].]+/g, '.variants[].socket[].$&')}
.variants[].response ${'hertz decibels phaseDegrees voltsRmsAt30Percent cost cost.tunedCircuit cost.gridCapacitor cost.plateBypass cost.load'.replace(/[\w.]+/g, '.variants[].response[].$&')}
.variants[].lowCornerHertz .variants[].highCornerHertz
.variants[].distortion ${'hertz modulationPercent secondPercent thirdPercent totalPercent'.replace(/\w+/g, '.variants[].distortion[].$&')}
.variants[].sensitivity ${'levelVoltsRms audioVoltsRmsAt30Percent secondPercent'.replace(/\w+/g, '.variants[].sensitivity[].$&')}
.variants[].sound ${'file gainDecibels loudnessLufs peakVolts'.replace(/\w+/g, '.variants[].sound.$&')}
.variants[].cautions`
  .trim()
  .split(/\s+/);

/** Keys of a circuit of a resistor load as described; it may hold more of what the equations used. */
const CIRCUIT_KEYS: readonly string[] = `
station station.carrierHertz station.levelVoltsRms station.modulation tunedCircuit tunedCircuit.loadedQ
tunedCircuit.detuneHertz tunedCircuit.unloadedQ tunedCircuit.coilHenries tunedCircuit.tap detector detector.kind
detector.law detector.gridCapacitorFarads detector.leakOhms detector.leakPosition detector.leakReturnVolts tube tube.type
tube.law tube.law.G tube.law.C tube.law.gamma tube.law.mu tube.law.phi tube.law.Gg tube.law.Cg tube.law.xi
tube.gridPlateFarads tube.gridCathodeFarads tube.plateCathodeFarads plate plate.supplyVolts plate.bypassFarads plate.load
plate.load.kind plate.load.ohms output output.couplingFarads output.loadOhms output.loadFarads`
  .trim()
  .split(/\s+/)
  .map((key) => `.variants[].circuit.${key}`);

describe('the result folder', () => {
  it('holds a sound for each variant, the tables, the plot and the result file', () => {
    const names = readdirSync(at('level')).filter((name) => name !== 'listening.html');
    expect(names.sort()).toEqual([
      'brighter.wav',
      'mellow.wav',
      'response.csv',
      'response.md',
      'response.svg',
      'result.json',
    ]);
    expect(readFileSync(join(at('level'), 'response.svg'), 'utf8')).toMatch(/^<svg /);
  });

  it('has a result file of the described keys, in base units, every number finite', () => {
    const result = resultIn('level');
    const found = new Set(keysOf(result));
    const circuit = [...found].filter((key) => key.startsWith('.variants[].circuit.'));
    expect([...found].filter((key) => !circuit.includes(key)).sort()).toEqual([...KEYS].sort());
    expect(CIRCUIT_KEYS.filter((key) => !circuit.includes(key))).toEqual([]);
    const text = readFileSync(join(at('level'), 'result.json'), 'utf8');
    JSON.parse(text, (key, value: unknown) => {
      if (typeof value === 'number') expect([key, Number.isFinite(value)]).toEqual([key, true]);
      return value;
    });
    for (const name of ['result.json', 'response.csv', 'response.md', 'response.svg']) {
      expect(readFileSync(join(at('level'), name), 'utf8')).not.toMatch(/\bNaN\b|Infinity|undefined|\[object/);
    }
  });

  it('says of clip, variants and circuit what was read', () => {
    const { format, clip: heard, variants } = resultIn('level');
    expect(format).toBe('presolder-result/1');
    expect(heard).toEqual({ file: 'clip.wav', seconds: 0.5, sampleRateHertz: 48_000, limitedSamples: 0 });
    expect(variants.map(({ name, changes }) => [name, changes])).toEqual([
      ['brighter', { 'plate.bypass': '100p' }],
      ['mellow', { 'plate.bypass': '3n3' }],
    ]);
    const listed = listVariants(LIST, 'set.yaml');
    variants.forEach((variant, k) => {
      const { station, plate, detector, tube, output } = listed[k]!.circuit;
      expect(variant.circuit).toMatchObject({ station, plate, detector, tube, output });
      expect(variant.circuit.tunedCircuit).toMatchObject({ loadedQ: 40, unloadedQ: null, coilHenries: null, tap: 1 });
      expect(variant.cautions.join()).toMatch(/90 V supply: such voltages can shock or kill/);
    });
  });

  it('counts response and corners from 400 Hz', () => {
    for (const { response, highCornerHertz, lowCornerHertz } of resultIn('level').variants) {
      expect(response.find((row) => row.hertz === 400)!.decibels).toBe(0);
      const below = response.filter((row) => row.hertz > highCornerHertz!).map((row) => row.decibels);
      expect(Math.max(...below)).toBeLessThan(-3);
      expect(lowCornerHertz === null || lowCornerHertz < 400).toBe(true);
    }
  });
});

describe('the sounds', () => {
  it('are the output volts over full scale, sample by sample, with one full scale for all', () => {
    const { fullScaleVolts, variants } = resultIn('level');
    const { channels } = readWav(readFileSync(clip), 'clip.wav');
    const { modulation } = programmeFrom(channels[0]!, 0.8);
    const deepest = modulation.reduce((most, value) => Math.max(most, value), 0);
    const tables = new TableStore();
    listVariants(LIST, 'set.yaml').forEach(({ circuit }, k) => {
      const rest = restPoint(circuit);
      const { volts, peakVolts } = renderClip(rest, tables.lawsFor(rest, deepest), modulation, 48_000);
      const { sound } = variants[k]!;
      expect(sound!.gainDecibels).toBe(0);
      expect(sound!.peakVolts).toBe(peakVolts);
      const heard = soundIn('level', sound!.file).channels[0]!;
      expect(heard.length).toBe(24_000);
      const worst = volts.reduce((most, value, n) => Math.max(most, Math.abs(value / fullScaleVolts! - heard[n]!)), 0);
      // half a step, and the rounding of the division
      expect(worst).toBeLessThanOrEqual(HALF_STEP * (1 + 1e-9));
    });
  });

  it('keep the level differences of the variants, the loudest at -1 dB', () => {
    const { fullScaleVolts, variants } = resultIn('level');
    const peaks = variants.map(({ sound }) => peakOf(soundIn('level', sound!.file)));
    variants.forEach(({ sound }, k) => {
      expect(Math.abs(peaks[k]! - sound!.peakVolts / fullScaleVolts!)).toBeLessThanOrEqual(HALF_STEP * (1 + 1e-9));
    });
    expect(Math.abs(Math.max(...peaks) - gain(-1))).toBeLessThanOrEqual(HALF_STEP * (1 + 1e-9));
    expect(Math.min(...peaks)).toBeLessThan(0.9 * Math.max(...peaks));
  });

  it('matched in loudness are equally loud, none over -1 dB, and the gains say how', async () => {
    expect((await ran(['render', clip, list, '--match', 'loudness', '--out', at('loud'), '--quiet'])).status).toBe(0);
    const { fullScaleVolts, variants } = resultIn('loud');
    const loudness = variants.map(({ sound }) => {
      const heard = soundIn('loud', sound!.file);
      // a rounding of 24 bits is 140 dB down; 0.001 LU is far above what it can move the sum by
      expect(Math.abs(integratedLoudness(heard.channels, 48_000)! - sound!.loudnessLufs!)).toBeLessThan(0.001);
      const peak = (sound!.peakVolts / fullScaleVolts!) * gain(sound!.gainDecibels);
      expect(Math.abs(peakOf(heard) - peak)).toBeLessThanOrEqual(HALF_STEP * (1 + 1e-9));
      expect(peak).toBeLessThan(gain(-1) + 1e-9);
      return sound!.loudnessLufs!;
    });
    expect(Math.abs(loudness[0]! - loudness[1]!)).toBeLessThan(1e-9);
    expect(variants.map(({ sound }) => sound!.gainDecibels === 0)).not.toEqual([true, true]);
    // matching changes gains alone
    expect(variants.map(({ sound, ...rest }) => rest)).toEqual(
      resultIn('level').variants.map(({ sound, ...rest }) => rest),
    );
  });

  it.each([
    // 16 bits: half a step of rounding and a whole one of dither; float: its 24 bits of mantissa
    ['16', 1, 16, 1.5 * 2 ** -15],
    ['32f', 3, 32, 2 ** -24],
  ])('of --wav %s are so coded, and the same sound', async (coding, tag, bits, step) => {
    expect((await ran(['render', clip, list, '--wav', coding, '--out', at(`wav${coding}`)])).status).toBe(0);
    const bytes = readFileSync(join(at(`wav${coding}`), 'mellow.wav'));
    expect([bytes.readUInt16LE(20), bytes.readUInt16LE(22), bytes.readUInt16LE(34)]).toEqual([tag, 1, bits]);
    expect(bytes.toString('utf8')).toContain('mellow; 6SL7-GT grid leak');
    const heard = soundIn(`wav${coding}`, 'mellow.wav').channels[0]!;
    const reference = soundIn('level', 'mellow.wav').channels[0]!;
    const worst = heard.reduce((most, value, n) => Math.max(most, Math.abs(value - reference[n]!)), 0);
    expect(worst).toBeLessThanOrEqual(step + HALF_STEP);
    expect(resultIn(`wav${coding}`)).toEqual(resultIn('level'));
  });

  it('of fine quality differ from those of normal by less than is heard', async () => {
    expect((await ran(['render', clip, list, '--quality', 'fine', '--out', at('fine')])).status).toBe(0);
    const [fine, normal] = ['fine', 'level'].map((place) => soundIn(place, 'brighter.wav').channels[0]!);
    const power = (values: Float64Array): number => values.reduce((sum, value) => sum + value * value, 0);
    const apart = fine!.map((value, n) => value - normal![n]!);
    expect(power(apart)).toBeGreaterThan(0);
    // 60 dB down: below the quietest difference of two versions that trained ears tell (common practice, no source)
    expect(10 * Math.log10(power(apart) / power(normal!))).toBeLessThan(-60);
  });

  it('of silence, of one sample, and of a side are rendered', async () => {
    const silent = saved(folder, 'silent.wav', plainWav({ rate: 8000 }, Array(8000).fill(0)));
    expect((await ran(['render', silent, single, '--out', at('silent')])).status).toBe(0);
    expect(resultIn('silent').variants[0]!.sound).toMatchObject({ loudnessLufs: null, gainDecibels: 0 });
    expect(peakOf(soundIn('silent', 'as drawn.wav'))).toBe(0);
    const one = saved(folder, 'one.wav', plainWav({}, u16(1000)));
    expect((await ran(['render', one, single, '--match', 'loudness', '--out', at('one')])).status).toBe(0);
    expect(soundIn('one', 'as drawn.wav').frames).toBe(1);
    const samples = Array.from({ length: 2000 }, (_, n) => [...u16(Math.round(9000 * Math.sin(n / 9)) & 0xffff), 0, 0]);
    const stereo = saved(folder, 'stereo.wav', plainWav({ channels: 2 }, samples.flat()));
    expect(
      (await ran(['render', stereo, single, '--set', 'station.side=left,right', '--out', at('sides')])).status,
    ).toBe(0);
    expect(peakOf(soundIn('sides', 'side left.wav'))).toBeGreaterThan(0.8);
    expect(peakOf(soundIn('sides', 'side right.wav'))).toBe(0);
  });
});

describe('a run', () => {
  it('made twice gives the same bytes', async () => {
    expect((await ran(['render', clip, list, '--out', at('again')])).status).toBe(0);
    expect(listing(at('again'))).toEqual(listing(at('level')));
    for (const place of ['dithered', 'dithered again']) {
      expect((await ran(['render', blip, single, '--wav', '16', '--out', at(place)])).status).toBe(0);
    }
    expect(listing(at('dithered'))).toEqual(listing(at('dithered again')));
  });

  it('writes neither clip nor list', async () => {
    const before = [clip, list].map((path) => [readFileSync(path).toString('base64'), statSync(path).mtimeMs]);
    expect((await ran(['render', clip, list, '--bypass', '1n', '--out', at('kept')])).status).toBe(0);
    expect([clip, list].map((path) => [readFileSync(path).toString('base64'), statSync(path).mtimeMs])).toEqual(before);
  });

  it('with --json prints the result file and nothing else; --quiet says nothing', async () => {
    const loud = await ran(['render', blip, single, '--json', '--out', at('json')]);
    expect([loud.status, loud.out]).toEqual([0, readFileSync(join(at('json'), 'result.json'), 'utf8')]);
    expect(loud.err).toContain('Turn the volume down');
    expect(await ran(['render', blip, single, '--json', '--quiet', '--out', at('json')])).toEqual({ ...loud, err: '' });
    expect(await ran(['render', blip, single, '--quiet', '--out', at('json')])).toEqual({
      status: 0,
      out: '',
      err: '',
    });
  });

  it('says whether it replaced earlier results', async () => {
    expect((await ran(['render', blip, single, '--out', at('twice')])).err).toContain('Wrote ');
    expect((await ran(['render', blip, single, '--out', at('twice')])).err).toContain(
      'Replaced the earlier results in ',
    );
  });

  it('shows progress on a terminal only', async () => {
    expect((await ran(['render', blip, single, '--out', at('told')])).err).not.toContain('\r');
    const told = await ran(['render', blip, single, '--out', at('told')], () => false, true);
    expect(told.err).toContain('\r\u001b[Krendering as drawn');
    // wiped before the last words
    expect(told.err.split('\r').at(-1)!.startsWith('\u001b[KReplaced')).toBe(true);
    expect((await ran(['render', blip, single, '--quiet', '--out', at('told')], () => false, true)).err).toBe('');
  });

  it('names a transmitter that limits', async () => {
    expect((await ran(['render', blip, single, '--modulation', '150%', '--out', at('limited')])).status).toBe(0);
    const { clip: heard, variants } = resultIn('limited');
    expect(heard!.limitedSamples).toBeGreaterThan(0);
    expect(variants[0]!.cautions.join()).toContain(`limiter held ${heard!.limitedSamples} samples`);
  });
});

describe('respond', () => {
  it('--json prints the result file without clip and sound, and writes nothing', async () => {
    const before = listing(folder);
    const { status, out, err } = await ran(['respond', list, '--json']);
    expect([status, err]).toEqual([0, '']);
    expect(listing(folder)).toEqual(before);
    const result = JSON.parse(out) as Result;
    expect(Object.keys(result)).toEqual(['format', 'variants']);
    expect(result.variants).toEqual(resultIn('level').variants.map(({ sound, ...rest }) => rest));
  });

  it('writes the same with --out, and prints tables otherwise', async () => {
    const { out: json } = await ran(['respond', list, '--json', '--out', at('paper')]);
    expect(readFileSync(join(at('paper'), 'result.json'), 'utf8')).toBe(json);
    expect(readdirSync(at('paper')).filter((name) => name.endsWith('.wav'))).toEqual([]);
    for (const name of ['response.csv', 'response.svg']) expect(readdirSync(at('paper'))).toContain(name);
    const { out, err } = await ran(['respond', list]);
    expect(err).toBe('');
    for (const words of ['brighter', 'mellow', '5 kHz', 'Caution', 'What would come back'])
      expect(out).toContain(words);
  });
});

describe('stock', () => {
  it('--json prints tubes and outputs', async () => {
    const { status, out, err } = await ran(['stock', '--json']);
    const stock = JSON.parse(out) as { tubes: { name: string }[]; outputs: { name: string }[] };
    expect([status, err]).toEqual([0, '']);
    expect(stock.tubes.map((tube) => tube.name)).toContain('6SL7-GT');
    expect(stock.outputs.map((part) => part.name)).toContain('next grid');
  });

  it.each(['90V', '250 V'])('a tube at %s is the one that a circuit has', async (supply) => {
    const { out } = await ran(['stock', 'tubes', '76', '--supply', supply, '--json']);
    const stock = JSON.parse(out) as { tube: unknown; publishedRows: unknown[]; errors: unknown[] };
    const { out: result } = await ran(['respond', '--tube', '76', '--supply', supply, '--json']);
    expect(stock.tube).toEqual((JSON.parse(result) as Result).variants[0]!.circuit.tube);
    expect(stock.errors).toHaveLength(stock.publishedRows.length);
    expect((await ran(['stock', '76', '--supply', supply, '--json'])).out).toBe(out);
  });

  it('prints tables', async () => {
    expect((await ran(['stock'])).out).toContain('6SL7-GT');
    expect((await ran(['stock', 'tubes', '6sl7'])).out).toContain('law taken here');
    expect((await ran(['stock', 'outputs'])).out).toContain('next grid');
  });
});

describe('start', () => {
  it('writes a list that respond answers, variant by variant', async () => {
    const path = at('first.yaml');
    const { status, out, err } = await ran(['start', path]);
    expect([status, out]).toEqual([0, '']);
    expect(err).toContain(`presolder respond ${path}`);
    const answer = await ran(['respond', path, '--json']);
    expect(answer.status).toBe(0);
    const names = (JSON.parse(answer.out) as Result).variants.map((variant) => variant.name);
    expect(names).toEqual(['as drawn', 'brighter', 'mellower']);
  });
});

describe('prove', () => {
  const few = ['--tones', '2500', '--carrier', '200 kHz'];

  it('--json prints the comparison; status 0 where all holds', async () => {
    const { status, out, err } = await ran(['prove', ...few, '--depths', '30', '--json']);
    expect([status, err]).toEqual([0, '']);
    expect(JSON.parse(out)).toMatchObject({
      format: 'presolder-proof/1',
      holds: true,
      variants: [{ tones: [{ hertz: 2500, modulation: 0.3 }] }],
    });
    expect((await ran(['prove', ...few, '--depths', '30'])).out).toContain('All hold');
  });

  it('status 3 where averaging has no ground: a grid that forgets within a carrier cycle', async () => {
    // carrier × leak × grid capacitor is 0.09 cycles here, where the list's own caution begins at 20
    const flags = ['--carrier', '60 kHz', '--leak', '10k', '--bypass', '0', '--level', '3 V'];
    const { status, out } = await ran(['prove', '--tones', '1 kHz', '--depths', '80', ...flags]);
    expect(status).toBe(3);
    expect(out).toMatch(/FAILS[\s\S]*NOT all hold/);
  });
});

describe('help', () => {
  it('goes to standard output with status 0, for the command and for each of its words', async () => {
    const all = await ran([]);
    expect([all.status, all.err]).toEqual([0, '']);
    expect(all.out).toContain('Exit status: 0 done');
    expect(await ran(['--help'])).toEqual(all);
    for (const command of ['render', 'respond', 'prove', 'stock', 'start']) {
      expect(all.out).toContain(command);
      const { status, out, err } = await ran([command, '--help']);
      expect([status, err]).toEqual([0, '']);
      expect(out).toContain(`Usage: presolder ${command}`);
    }
  });
});
