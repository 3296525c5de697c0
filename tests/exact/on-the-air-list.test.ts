import { describe, expect, it } from 'vitest';
import { type Fault, InputError } from '../../src/engine/errors.ts';
import { partsListSchema } from '../../src/list/json-schema.ts';
import { listVariants, type Setting } from '../../src/list/variants.ts';

const airOf = (text: string, settings: readonly Setting[] = []) =>
  listVariants(text, 'set.yaml', settings).map(({ onTheAir }) => onTheAir);
const faultsOf = (text: string): readonly Fault[] => {
  try {
    airOf(text);
  } catch (error) {
    if (error instanceof InputError) return error.faults;
    throw error;
  }
  return [];
};

describe('what is on the air', () => {
  it('nothing, where nothing is listed', () => {
    expect(airOf('')).toEqual([null]);
    expect(airOf('on the air: { noise band: 5 kHz, seed: 3 }')).toEqual([null]);
    expect(airOf('on the air: { noise: 0 V, static: none, second station: { level: 0 V } }')).toEqual([null]);
  });

  it('sections with their keys, levels in volts or re the station', () => {
    const [found] = airOf(`
station: { level: 10 mV }
on the air:
  second station: { clip: other.wav, offset: -9 kHz, level: -20 dB, modulation: 60 %, channel limit: none }
  noise: 20 µV
  noise band: 6 kHz
  static: { level: 3 mV, crashes a second: 2, decay: 15 ms }
  beat oscillator: { pitch: 1 kHz, level: 5 mV }
  morse: { text: "CQ, CQ", speed: 18 wpm, edge: 4 ms }
  seed: 7
`);
    // −20 dB is a tenth
    expect(found?.air.secondStation?.levelVoltsRms).toBeCloseTo(1e-3, 15);
    expect(found).toMatchObject({
      air: {
        secondStation: { offsetHertz: -9000, modulation: 0.6, channelLimit: 'none' },
        noise: { levelVoltsRms: 20e-6, bandHertz: 6000 },
        statics: { levelVoltsRms: 3e-3, crashesPerSecond: 2, decaySeconds: 0.015, bandHertz: 6000 },
        beatOscillator: { pitchHertz: 1000, levelVoltsRms: 5e-3 },
        seed: 7,
      },
      otherClip: 'other.wav',
      keying: { text: 'CQ, CQ', wordsPerMinute: 18, edgeSeconds: 4e-3 },
    });
  });

  it('noise re the station, as the others', () => {
    const [found] = airOf('station: { level: 10 mV }\non the air: { noise: -40 dB }');
    expect(found?.air.noise?.levelVoltsRms).toBeCloseTo(1e-4, 15);
  });

  it('one line for a section, and none takes it away', () => {
    const [both, less] = airOf(`
on the air: { second station: other.wav, static: 2 mV, beat oscillator: 700 Hz, morse: CQ }
variants:
  both: {}
  less: { on the air.second station: none, on the air: { static: none, beat oscillator: none, morse: { speed: 20 } } }
`);
    expect(both?.otherClip).toBe('other.wav');
    expect(both?.air.beatOscillator?.pitchHertz).toBe(700);
    expect(both?.air.statics?.levelVoltsRms).toBe(2e-3);
    expect(less?.air).toMatchObject({ secondStation: null, statics: null, beatOscillator: null });
    expect(less?.keying).toMatchObject({ text: 'CQ', wordsPerMinute: 20 });
    expect(less?.otherClip).toBeNull();
    expect(airOf('on the air: { morse: CQ }\nvariants: { a: { on the air.morse: none } }')).toEqual([null]);
  });

  it('a text given whole makes one variant, whatever its commas', () => {
    const set = (whole: boolean): Setting => ({ key: 'on the air.morse', value: 'CQ, TEST', where: '--morse', whole });
    expect(airOf('', [set(true)]).map((found) => found?.keying)).toMatchObject([{ text: 'CQ, TEST' }]);
    expect(airOf('', [set(false)])).toHaveLength(2);
  });

  it.each([
    ['second station: { ofset: 3 kHz }', { code: 'unknown-key', hint: 'nearest: offset', column: 21 }],
    ['second station: { offset: 60 kHz }', { code: 'out-of-range', where: 'on the air.second station.offset' }],
    ['second station: { level: 70 dB }', { code: 'out-of-range', expected: '0 V to 30 V, -120 dB to 60 dB, or none' }],
    ['second station: { level: 20 kHz }', { code: 'wrong-unit', hint: 'that is a frequency' }],
    ['second station: { level: 55 dB }', { code: 'out-of-range', got: '55 dB', expected: '30 V at most' }],
    ['second station: { modulation: 120 % }', { code: 'out-of-range' }],
    ['noise: 20 mH', { code: 'wrong-unit', where: 'on the air.noise', column: 10 }],
    ['static: {}', { code: 'no-value', got: 'nothing in it' }],
    ['static: { decay: 3 kHz }', { code: 'wrong-unit', hint: 'that is a frequency' }],
    ['beat oscillator: 20 kHz', { code: 'out-of-range', where: 'on the air.beat oscillator.pitch', column: 20 }],
    ['morse: "CQ #"', { code: 'no-morse-sign', where: 'on the air.morse.text', got: '"#"', column: 10 }],
    ['morse: { speed: 20 }', { code: 'no-morse-text', where: 'on the air.morse.text' }],
    ['morse: { text: E, speed: fast }', { code: 'wrong-speed', column: 28 }],
    ['morse: { text: E, edge: 200 ms }', { code: 'edge-too-long', expected: 'at most a dot, 92.3 ms at this speed' }],
    ['morse: { text: E, keyed by: hand }', { code: 'wrong-value', expected: 'text, clip or none' }],
  ])('%s: refused at its place', (line, fault) => {
    const found = faultsOf(`on the air:\n  ${line}\n`);
    expect(found).toHaveLength(1);
    expect(found[0]).toMatchObject({ ...fault, ...('column' in fault ? { line: 2, file: 'set.yaml' } : {}) });
  });

  it('no carrier to count the others by', () => {
    expect(faultsOf('station: { level: 0 V }\non the air: { noise: 3 uV }')).toMatchObject([
      { code: 'no-station', where: 'station.level', line: 1 },
    ]);
  });

  it('the JSON Schema takes a line as well as a section', () => {
    const air = JSON.stringify((partsListSchema().properties as Record<string, unknown>)['on the air']);
    expect(air).toContain('"crashes a second"');
    expect(air.match(/"anyOf":\[\{"type":\["string","number"\]\},\{"type":"object"/g)).toHaveLength(4);
  });
});
