import { chmodSync, mkdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { freshFolder, listing, ran, saved, shortClip } from './command-run.ts';
import { chunk, formatBody, plainWav, riff } from './wav-crafting.ts';

let folder = '';
let clip = '';
const at = (name: string): string => join(folder, name);

beforeAll(() => {
  folder = freshFolder();
  clip = saved(folder, 'clip.wav', shortClip(0.02));
  saved(folder, 'good.yaml', 'plate:\n  bypass: 100p\n');
  mkdirSync(at('folder'));
  saved(at('folder'), 'notes.txt', 'mine');
  mkdirSync(at('results'));
  saved(at('results'), 'result.json', '{ "format": "presolder-result/1", "variants": [] }');
  saved(at('results'), 'notes.txt', 'mine too');
});
afterAll(() => {
  rmSync(folder, { recursive: true });
});

/** Runs what must be refused: status 2, the places named, nothing on standard output, no insides, nothing written. */
async function refused(argv: readonly string[], ...named: readonly string[]): Promise<void> {
  const before = listing(folder);
  const { status, out, err } = await ran(argv);
  expect(err).not.toBe('');
  for (const words of named) expect(err.toLowerCase()).toContain(words.toLowerCase());
  expect(err).not.toMatch(/^\s+at |\bError\b|node:|fault of the program|undefined|NaN|\[object|\.ts\b/m);
  expect(status).toBe(2);
  expect(out).toBe('');
  expect(listing(folder)).toEqual(before);
}

const out = (): string[] => ['--out', at('out')];

describe('what is wrong in a parts list is told with its line and column', () => {
  const bomb = Array.from({ length: 9 }, (_, n) => `    - &a${n + 1} [${Array(9).fill(`*a${n}`).join(', ')}]`).join(
    '\n',
  );
  const cases: [string, string, string, ...string[]][] = [
    ['a wrong unit', 'plate:\n  bypass: 100 kHz', ':2:11: ', 'plate.bypass', '100 kHz', 'that is a frequency'],
    ['a key with a slip', 'plate:\n  bypas: 1n', ':2:3: ', 'plate.bypas', 'nearest: bypass'],
    ['a section with a slip', 'detektor:\n  leak: 1M', ':1:1: ', 'detektor', 'nearest: detector'],
    ['a change with a slip', 'variants:\n  a: { plate.suply: 45 }', ':2:8: ', 'nearest: plate.supply'],
    ['a row with a slip', 'tube:\n  rows:\n    - { plate: 90, gird: -5 }', ':3:20: ', 'gird', 'nearest: grid'],
    ['a negative capacitance', 'detector:\n  grid capacitor: -150 pF', ':2:19: ', '-150 pF', '100 fF to 1 F'],
    ['a negative bypass', 'plate: { bypass: -1p }', ':1:18: ', 'plate.bypass', '0, or '],
    ['a tube of no catalogue', 'detector:\n  tube: 6SL6-GT', ':2:9: ', '6SL6-GT', 'nearest: 6SL7-GT'],
    ['a row that was not published', 'tube: { fit at plate volts: 99 V }', ':1:29: ', '99 V', 'published row'],
    ['a supply that nobody has', 'plate: { supply: 50 kV }', ':1:18: ', '50 kV', '0 V to 1 kV'],
    ['a supply in words', 'plate: { supply: ninety }', ':1:18: ', 'ninety', 'a voltage such as 45 V'],
    ['more than twice full modulation', 'station: { modulation: 300 % }', ':1:24: ', '300 %', '0 % to 200 %'],
    ['a prefix that can be two', 'station: { level: 60 MV }', ':1:19: ', '60 MV', 'milli is m'],
    ['a comma that can be two', "plate: { bypass: '1,500 pF' }", ':1:18: ', '1,500 pF', 'decimal point'],
    ['a law that is none', 'detector: { law: cubic }', ':1:18: ', 'cubic', 'tube, square or linear'],
    ['a load that is none', 'plate: { load: gyrator 5 H }', ':1:16: ', 'gyrator 5 H', 'resistor 220 k'],
    ['a load without its unit', 'plate: { load: resistor 22x }', ':1:16: ', '22x', 'a resistance'],
    ['two sources', 'tuned circuit:\n  loaded Q: 40\n  coil: 200u', ':3:9: ', 'a loaded Q alone'],
    ['coil and capacitor', 'tuned circuit: { coil: 200u, capacitor: 150p }', ':1:41: ', 'one of them'],
    ['detuning past the carrier', 'tuned circuit: { detune: 800 kHz }', ':1:26: ', 'half the carrier'],
    ['no leak', 'detector: { leak: none }', ':1:19: ', 'detector.leak', '2M2'],
    ['no filament', 'detector: { leak returns to: filament + }', ':1:30: ', 'heater'],
    ['an incomplete row', 'tube:\n  rows:\n    - { plate: 90, grid: 0, current: 1m, mu: 20 }', ':3:7: '],
    ['one reading', 'tube: { grid current: { readings: [ { grid: -0.3, leak: 1M } ] } }', ':1:35: ', 'two readings'],
    ['a key given twice', 'plate:\n  bypass: 1n\n  bypass: 2n', ':3:3: ', 'plate.bypass'],
    ['a key without a value', 'plate:\n  bypass:\n', ':2:3: ', 'plate.bypass', 'nothing'],
    ['two variants of one name', 'variants:\n  a: { plate.supply: 45 }\n  a: {}', ':3:3: ', '"a"'],
    ['two names alike but for case', 'variants:\n  Mellow: {}\n  MELLOW: { plate.supply: 45 }', ':3:3: ', '"Mellow"'],
    [
      'too many variants',
      `variants:\n${'abcdefghijklmnopqrstuvwxy'.replace(/./g, '  $&: {}\n')}`,
      '',
      '25 variants',
      'at most 24',
    ],
    ['no YAML', 'plate: [1, 2', ':2:1: '],
    ['two keys on a line', 'name: a: b', ':1:7: ', 'two keys on one line'],
    ['a tab', 'plate:\n\tbypass: 1n', ':2:1: ', 'indent with spaces'],
    ['words', 'hello', ':1:1: ', 'sections such as'],
    ['aliases that multiply', `tube:\n  rows:\n    - &a0 [x, x, x]\n${bomb}`, ':', 'ordinary size'],
    ['sections in sections', `tube: ${'{a: '.repeat(30_000)}`, ':1:', 'ordinary size'],
    ['rows in rows', '- '.repeat(60_000), ':1:', 'ordinary size'],
    ['a control character', 'plate: { bypass: "1\\e[2J" }', ':1:18: ', '1?[2J'],
  ];

  it.each(cases)('%s', async (_, text, place, ...named) => {
    const list = saved(folder, 'wrong.yaml', `${text}\n`);
    await refused(['respond', list], `${list}${place}`, ...named);
    await refused(['render', clip, list, ...out()], `${list}${place}`);
    rmSync(list);
  });
});

describe('a parts list that is none', () => {
  it.each([
    ['a file with NUL', Uint8Array.from([0x61, 0, 0x62]), 'not text'],
    ['Latin-1', Uint8Array.from([...'load: 1 M'].map((letter) => letter.charCodeAt(0)).concat(0xd9)), 'UTF-8'],
    ['UTF-16', new Uint8Array(Uint16Array.from([...'\ufeffname: a'].map((c) => c.charCodeAt(0))).buffer), 'UTF-16'],
    ['a file too large', `# ${'x'.repeat(300_000)}`, 'more than 200 kB'],
  ])('%s', async (_, contents, named) => {
    const list = saved(folder, 'wrong.yaml', contents);
    await refused(['respond', list], list, named);
    rmSync(list);
  });

  it('nothing there, or a folder', async () => {
    await refused(['respond', at('none.yaml')], at('none.yaml'), 'no such file', 'presolder start');
    await refused(['respond', join(clip, 'set.yaml')], join(clip, 'set.yaml'), 'no such file');
    await refused(['respond', at('folder')], at('folder'), 'a folder');
  });

  it('clip and list swapped, either way said', async () => {
    await refused(['render', at('good.yaml'), clip, ...out()], clip, 'the clip comes first');
    const large = saved(
      folder,
      'large.wav',
      Uint8Array.from({ length: 250_000 }, (_, n) => (n % 250) + 1),
    );
    await refused(['render', at('good.yaml'), large, ...out()], large, 'the clip comes first');
    rmSync(large);
    await refused(
      ['render', at('good.yaml'), ...out()],
      at('good.yaml'),
      'and no clip; expected a clip before the parts list',
    );
  });
});

describe('a clip that is none', () => {
  it.each([
    ['text', 'text.wav', 'just words, no sound\n', 'text, not sound'],
    ['empty', 'empty.wav', '', 'an empty file'],
    ['a header cut off', 'cut.wav', shortClip(0.01).slice(0, 30), ''],
    ['no samples', 'none.wav', plainWav({}, []), 'no sound'],
    [
      'no channels',
      'mute.wav',
      riff(chunk('fmt ', formatBody({ channels: 0, block: 2 })), chunk('data', [0, 0])),
      '0 channels',
    ],
    ['three channels', 'three.wav', plainWav({ channels: 3 }, [0, 0, 0, 0, 0, 0]), 'mono or stereo'],
    ['a rate of 100 Hz', 'slow.wav', plainWav({ rate: 100 }, [0, 0]), '100 Hz'],
    ['bytes of no format', 'noise.mp3', Uint8Array.from({ length: 400 }, (_, n) => (n * n * 31) % 251), 'WAV, FLAC'],
  ])('%s', async (_, name, contents, named) => {
    const path = saved(folder, name, contents);
    await refused(['render', path, at('good.yaml'), ...out()], path, named);
    rmSync(path);
  });

  it('nothing there, or a folder', async () => {
    await refused(['render', at('none.wav'), ...out()], at('none.wav'), 'no such file');
    await refused(['render', at('folder'), ...out()], at('folder'), 'a folder');
  });
});

describe('flags', () => {
  it.each<[string[], ...string[]]>([
    [['--bypass', '100 kHz'], '--bypass', 'that is a frequency'],
    [['--bypass', ''], '--bypass', 'nothing'],
    [['--bypass', '1n,,2n'], '--bypass', '1n,,2n'],
    [['--bypass', '1n,1N'], '--bypass', '"bypass 1N"'],
    [['--bypass=-1n'], '--bypass', '-1n'],
    [['--leak', '0'], '--leak', '1 Ω to 1 GΩ'],
    [['--tube', '6SL6-GT'], '--tube', 'nearest: 6SL7-GT'],
    [['--load', 'gyrator'], '--load', 'gyrator'],
    [['--detector', 'magic'], '--detector', 'grid leak'],
    [['--law', 'cubic'], '--law', 'tube, square or linear'],
    [['--carrier', '5 Hz'], '--carrier', '30 kHz to 30 MHz'],
    [['--supply', '90', '--set', 'plate.bypass'], '--set', "'=' between"],
    [['--set', '=5'], '--set', "'=' between"],
    [['--set', 'plate.bypas=5'], '--set plate.bypas', 'nearest: plate.bypass'],
    [['--set', 'plate=5'], '--set plate', 'a key of the parts list'],
    [['--set', 'plate.bypass='], '--set plate.bypass', 'nothing'],
    [['--set', 'detector.leak returns to=filament +'], '--set detector.leak returns to', 'heater'],
    [['--supply', '1,2,3,4,5', '--level', '1,2,3,4,5'], 'variants', '25 variants', 'comma lists multiply'],
    [['--colour', 'red'], '--colour', 'unknown option'],
    [['--bypas', '1n'], '--bypas', 'Did you mean --bypass?'],
    [['one too many'], 'too many arguments'],
  ])('%j', async (flags, ...named) => {
    await refused(['render', clip, at('good.yaml'), ...flags, ...out()], ...named);
  });

  it.each<[string[], ...string[]]>([
    [['--match', 'volume'], '--match', 'one of level, loudness'],
    [['--wav', '12'], '--wav', 'one of 16, 24, 32f'],
    [['--quality', 'best'], '--quality', 'one of normal, fine'],
  ])('%j', async (flags, ...named) => {
    await refused(['render', clip, ...flags, ...out()], ...named);
  });

  it('no command of that name, no clip', async () => {
    await refused(['rendr', clip], 'rendr', 'Did you mean render?');
    await refused(['--colour'], '--colour');
    await refused(['render'], 'no clip');
    await refused(['render', clip, '--bypass'], '--bypass', 'argument missing');
  });
});

describe('a circuit that cannot be', () => {
  it('is told with the name of its variant', async () => {
    // an inductive plate drives the grid through the grid-plate capacitance: a tuned-grid, tuned-plate oscillator
    const load = 'plate.load: choke 1 mH, plate.load.self capacitance: 0, plate.bypass: 0';
    const wrong = `${load}, output.load capacitance: 0, tuned circuit.unloaded Q: 300`;
    const list = saved(folder, 'wrong.yaml', `variants:\n  good: {}\n  bad one: { ${wrong} }\n`);
    await refused(['respond', list], '"bad one"', 'oscillate');
    await refused(['render', clip, list, ...out()], '"bad one"', 'oscillate');
    rmSync(list);
  });
});

describe('a place for results that is none', () => {
  it.each([
    ['through a file', () => join(clip, 'out'), 'through a file'],
    ['deep through a file', () => join(clip, 'a', 'b', 'out'), 'through a file'],
    ['a file', () => clip, 'a file'],
    ['a folder with other files', () => at('folder'), '"notes.txt"'],
    ['earlier results among other files', () => at('results'), '"notes.txt"'],
    ['a name too long', () => at('x'.repeat(300)), 'too long'],
    ['a name too long above it', () => join(at('x'.repeat(300)), 'out'), 'too long'],
    ['the folder of the clip', () => folder, 'other files'],
    ['here', () => process.cwd(), 'working in'],
    ['above here', () => join(process.cwd(), '..'), 'working in'],
  ])('%s', async (_, place, named) => {
    await refused(['render', clip, at('good.yaml'), '--out', place()], place(), named);
    await refused(['respond', at('good.yaml'), '--out', place()], place(), named);
  });

  it('a folder without leave to write', async () => {
    // the superuser may write anywhere, and Windows keeps its leave elsewhere
    if (process.platform === 'win32' || process.getuid?.() === 0) return;
    mkdirSync(at('locked'));
    chmodSync(at('locked'), 0o500);
    await refused(['render', clip, '--out', join(at('locked'), 'out')], join(at('locked'), 'out'), 'without leave');
    chmodSync(at('locked'), 0o700);
    rmSync(at('locked'), { recursive: true });
  });
});

describe('the other commands', () => {
  it('stock: a tube, a kind, an output, a supply that are none', async () => {
    await refused(['stock', 'tubes', '6SL6-GT'], 'stock tubes', 'nearest: 6SL7-GT');
    await refused(['stock', '6SL6-GT'], 'stock tubes', 'nearest: 6SL7-GT');
    await refused(['stock', 'coils', 'x'], 'coils', 'tubes');
    await refused(['stock', 'outputs', 'horn'], 'horn', 'next grid');
    await refused(['stock', 'tubes', '76', '--supply', '5 kV'], '--supply', '5 kV');
    await refused(['stock', 'tubes', '76', '--supply', '90 mA'], '--supply', 'that is a current');
  });

  it('start: over a file, a folder, into no folder, through a file', async () => {
    await refused(['start', at('good.yaml')], at('good.yaml'), 'nothing is overwritten');
    await refused(['start', at('folder')], at('folder'), 'already taken');
    await refused(['start', join(at('none'), 'a.yaml')], join(at('none'), 'a.yaml'), 'not there');
    await refused(['start', join(clip, 'a.yaml')], join(clip, 'a.yaml'), 'through a file');
  });

  it.each<[string[], ...string[]]>([
    [['--tones', '1010'], '--tones', 'multiples of 25 Hz'],
    [['--tones', '400,410'], '--tones', '410'],
    [['--tones', '0'], '--tones', '25 Hz to 16 kHz'],
    [['--tones', '20 kHz'], '--tones', '20 kHz'],
    [['--tones', ''], '--tones', 'nothing'],
    [['--tones', 'low'], '--tones', 'low'],
    [['--depths', '0'], '--depths', '0.1 % to 100 %'],
    [['--depths', '120'], '--depths', '120 %'],
    [['--depths', '30,'], '--depths', 'nothing'],
    [['--depths', '3 dB'], '--depths', '3 dB'],
    [['--tones', '400,5000', '--carrier', '1 MHz,30 kHz'], '--tones', '5 kHz', '3 kHz'],
    [['--level', '0'], 'station.level', 'a carrier'],
    [['--level', '60 mV,0'], 'station.level', 'a carrier'],
  ])('prove %j', async (flags, ...named) => {
    await refused(['prove', at('good.yaml'), ...flags], ...named);
  });
});
