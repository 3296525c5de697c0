import { mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { CircuitFigures } from '../../src/engine/choosing/figures.ts';
import { THIRD_OCTAVE_NOMINAL_HERTZ } from '../../src/engine/parts/third-octaves.ts';
import { listVariants } from '../../src/list/variants.ts';
import { freshFolder, listing, ran, saved } from './command-run.ts';

/** A stiff source, so that each circuit is solved quickly: here only words, numbers on paper and statuses are held. */
const PLAIN = 'name: Bench set\ntuned circuit: { loaded Q: 40 }\nplate: { bypass: 220p }\n';
const LIST = `${PLAIN}variants:
  brighter: { plate.bypass: 100p }
  as drawn: {}
`;

let folder = '';
let list = '';
let plain = '';
let measured = '';
const at = (name: string): string => join(folder, name);

interface Choice {
  readonly format: string;
  readonly goals: readonly string[];
  readonly variants: readonly {
    readonly variant: string;
    readonly met: boolean;
    readonly exact: readonly (readonly number[])[];
    readonly nearest: readonly number[];
    readonly best: readonly number[] | null;
    readonly rows: readonly {
      readonly role: string;
      readonly values: readonly number[];
      readonly figures: readonly (number | null)[];
      readonly moved: Readonly<Record<string, number | null>>;
      readonly best: boolean;
    }[];
    readonly parts: readonly Readonly<Record<string, unknown>>[];
    readonly inTheWay: { readonly costs: readonly { readonly part: string; readonly decibels: number }[] } | null;
  }[];
}

async function chosen(...argv: readonly string[]): Promise<Choice & { readonly status: number }> {
  const { status, out, err } = await ran(['choose', ...argv, '--json']);
  expect(err).toBe('');
  return { ...(JSON.parse(out) as Choice), status };
}

/** Figures of the set with other values, from the engine. */
function figuresWith(values: Readonly<Record<string, string>>): CircuitFigures {
  const settings = Object.entries(values).map(([key, value]) => ({ key, value, where: '--set' }));
  return new CircuitFigures(listVariants(PLAIN, 'plain.yaml', settings)[0]!.circuit);
}

beforeAll(() => {
  folder = freshFolder();
  list = saved(folder, 'set.yaml', LIST);
  plain = saved(folder, 'plain.yaml', PLAIN);
  // the set's own response with 470 pF, 20 dB down, as another instrument would write it
  const figures = figuresWith({ 'plate.bypass': '470p' });
  const rows = THIRD_OCTAVE_NOMINAL_HERTZ.map(
    (hertz) => `${hertz};${(figures.decibels(hertz) - 20).toFixed(3).replace('.', ',')}`,
  );
  measured = saved(folder, 'measured.csv', `Frequency (Hz);Level (dB)\r\n${rows.join('\r\n')}\r\n`);
});
afterAll(() => {
  rmSync(folder, { recursive: true });
});

describe('a part chosen by a goal', () => {
  it('one answer for variants that differ in that part alone; exact, neighbours, best and what moves', async () => {
    const { status, format, goals, variants } = await chosen('bypass', list, '--until', '-15 dB at 5 kHz');
    expect(status).toBe(0);
    expect(format).toBe('presolder-choice/1');
    expect(goals).toEqual(['-15 dB at 5 kHz']);
    expect(variants).toHaveLength(1);
    const [answer] = variants;
    expect(answer).toMatchObject({ variant: 'as drawn', met: true, inTheWay: null });
    const roles = answer!.rows.map((row) => row.role);
    expect(roles).toEqual(expect.arrayContaining(['as listed', 'below', 'exact', 'above']));
    const row = (role: string) => answer!.rows.find((one) => one.role === role)!;
    expect(row('exact').figures[0]).toBeCloseTo(-15, 6);
    expect(row('exact').moved.decibelsAt5000Hertz).toBeCloseTo(-15, 6);
    expect(row('as listed').values).toEqual([220e-12]);
    const [below, exact, above] = ['below', 'exact', 'above'].map((role) => row(role).values[0] as number);
    expect(below!).toBeLessThan(exact!);
    expect(exact!).toBeLessThan(above!);
    // neighbours of E12 are a fifth apart, rounded to two digits
    expect(above! / below!).toBeLessThan(1.3);
    expect(answer!.rows.filter((one) => one.best).map((one) => one.values)).toEqual([answer!.best]);
    expect(answer!.parts[0]).toMatchObject({ key: 'plate.bypass', kind: 'capacitance', listed: 220e-12, among: 'E12' });
  });

  it('the value put back into a list gives what was promised', async () => {
    const { variants } = await chosen('grid-capacitor', plain, '--until', 'corner 1.5 kHz', '--between', '20p,500p');
    const farads = variants[0]!.exact[0]![0]!;
    const { out } = await ran(['respond', plain, '--grid-capacitor', String(farads), '--json']);
    const { highCornerHertz } = (JSON.parse(out) as { variants: { highCornerHertz: number }[] }).variants[0]!;
    // half a percent is the promise; both come from one engine
    expect(highCornerHertz / 1500).toBeCloseTo(1, 5);
  });

  it('the best of a drawer, by trying every value in it', async () => {
    const drawer = ['47p', '100p', '150p', '330p', '1n'];
    const { variants } = await chosen('bypass', list, '--until', '-15 dB at 5 kHz', '--drawer', drawer.join(', '));
    const misses = drawer.map((value) => Math.abs(figuresWith({ 'plate.bypass': value }).decibels(5000) + 15));
    const best = drawer[misses.indexOf(Math.min(...misses))]!;
    expect(variants[0]!.best).toEqual([Number(best.replace('p', 'e-12').replace('n', 'e-9'))]);
  });

  it('every other variant has its own answer', async () => {
    const { variants } = await chosen(
      'bypass',
      list,
      '--supply',
      '45,90',
      '--until',
      'carrier on plate 10 mV',
      '--between',
      '50p,5n',
    );
    expect(variants.map((answer) => answer.variant)).toEqual(['as drawn, supply 45', 'as drawn, supply 90']);
    expect(variants[0]!.exact).not.toEqual(variants[1]!.exact);
  });

  it('parts without preferred values have an exact one alone, unless a drawer is given', async () => {
    const plain = await chosen('supply', list, '--until', 'plate 30 V');
    expect(plain.variants[0]).toMatchObject({ met: true, best: null });
    const own = await chosen('supply', list, '--until', 'plate 30 V', '--drawer', '45 V,67.5 V,90 V,135 V');
    expect(own.variants[0]!.best).toEqual([135]);
  });

  it('prints a table that names the best, the range and the exact value', async () => {
    const { status, out } = await ran([
      'choose',
      'bypass',
      list,
      '--until',
      'loudest with corner above 1 kHz',
      '--series',
      'E6',
    ]);
    expect(status).toBe(0);
    expect(out).toMatch(/^as drawn: bypass until loudest with corner above 1 kHz$/m);
    expect(out).toMatch(/best of E6$/m);
    expect(out).toContain('Searched: bypass 1 pF to 1 µF.');
    expect(out).toMatch(/^Exact: bypass [\d.]+ (p|n)F/m);
    expect(out).toMatch(/^Caution: 90 V supply/m);
  });

  it('two parts for two goals', async () => {
    // what 470 pF and 3 MΩ give, so that there is an answer
    const sought = figuresWith({ 'plate.bypass': '470p', 'detector.leak': '3M' });
    const [hertz, percent] = [sought.moved().highCornerHertz!, sought.moved().secondPercent!];
    const goals = `corner ${hertz} Hz; second harmonic ${percent} % at 400 Hz, 80 % modulation`;
    const { status, variants } = await chosen('bypass,leak', list, '--until', goals, '--between', '50p,5n; 500k,10M');
    expect(status).toBe(0);
    const exact = variants[0]!.rows.find((row) => row.role === 'exact')!;
    expect(exact.figures[0]! / hertz).toBeCloseTo(1, 5);
    expect(exact.figures[1]! / percent).toBeCloseTo(1, 5);
    expect(variants[0]!.best).toHaveLength(2);
  });
});

describe('a goal that cannot be met', () => {
  it('status 3, the best that can be had, and the part in the way', async () => {
    const { status, variants } = await chosen('bypass', list, '--until', 'corner 6 kHz', '--between', '50p,5n');
    expect(status).toBe(3);
    expect(variants[0]).toMatchObject({ met: false, exact: [] });
    expect(variants[0]!.inTheWay!.costs[0]).toMatchObject({ part: 'gridCapacitor' });
    const { out } = await ran(['choose', 'bypass', list, '--until', 'corner 6 kHz', '--between', '50p,5n']);
    expect(out).toMatch(/NOT met\. The best that can be had: corner [\d.]+ kHz, with bypass/);
    expect(out).toMatch(/In the way: grid capacitor \(takes [\d.]+ dB at 6 kHz\)/);
  });

  it('a distortion that no load gives: the change of another part that helps most', async () => {
    const goal = ['--until', 'second harmonic 2 %', '--between', '100k,300k', '--drawer', '100k,220k'];
    const { status, out } = await ran(['choose', 'load', list, ...goal]);
    expect(status).toBe(3);
    expect(out).toMatch(/What would help most: (half|twice) the [\w ]+ \(second harmonic [\d.]+ %\)/);
  });
});

describe('a part fitted to a measurement', () => {
  it('finds the value behind it, with its interval and the nearest that can be had', async () => {
    const { status, out, err } = await ran(['choose', 'bypass', list, '--fit', measured, '--json']);
    expect(err).toBe('');
    expect(status).toBe(0);
    const { variants, readings } = JSON.parse(out);
    expect(readings).toBe(29);
    const [{ key, value, low95, high95, below, above }] = variants[0].parts;
    expect(key).toBe('plate.bypass');
    // the table is rounded to a thousandth of a decibel
    expect(value / 470e-12).toBeCloseTo(1, 2);
    expect(low95).toBeLessThan(value);
    expect(high95).toBeGreaterThan(value);
    expect([below, above]).toContain(470e-12);
    expect(variants[0].residualRmsDecibels).toBeLessThan(0.001);
  });

  it('prints value, interval and what is left over', async () => {
    const { out } = await ran(['choose', 'bypass,leak', list, '--fit', measured]);
    expect(out).toMatch(/^bypass +220 pF +4\d\d(\.\d)? pF +[\d.]+ pF to [\d.]+ pF/m);
    expect(out).toMatch(/Left over: 0\.00 dB rms/);
  });
});

describe('a measurement laid over a response', () => {
  it('stands in every file, with its difference', async () => {
    const folderOut = at('over');
    const argv = ['respond', plain, '--bypass', '220p,470p', '--measured', measured, '--out', folderOut];
    const { status, out } = await ran(argv);
    expect(status).toBe(0);
    expect(out).toMatch(/From measured\.csv, rms over 29 readings: bypass 220p [\d.]+ dB, bypass 470p 0\.00 dB\./);
    expect(out).toContain('| Hz | measured | difference, bypass 220p | difference, bypass 470p |');
    const read = (name: string): string => readFileSync(join(folderOut, name), 'utf8');
    const result = JSON.parse(read('result.json'));
    expect(result.measured.points).toHaveLength(29);
    // the file is 20 dB down; what is laid over is re its own 400 Hz
    expect(result.measured.points.find((point: { hertz: number }) => point.hertz === 400).decibels).toBe(0);
    expect(result.variants[1].measured.rmsDifferenceDecibels).toBeLessThan(0.001);
    expect(result.variants[0].measured.rmsDifferenceDecibels).toBeGreaterThan(0.3);
    const [heads, ...rows] = read('response.csv')
      .replace(/^\ufeff/, '')
      .trim()
      .split('\r\n');
    expect(heads).toContain('"difference, measured less response (dB): bypass 220p"');
    expect(heads).toMatch(/,measured \(dB re 400 Hz\): [^,]*measured\.csv$/);
    const last = rows.map((row) => row.split(','));
    for (const cells of last) {
      const [reading, apart] = [Number(cells.at(-1)), Number(cells.at(-2))];
      // the difference column before it belongs to the second variant, which is the one measured
      expect(Number.isFinite(reading)).toBe(true);
      expect(Math.abs(apart)).toBeLessThan(0.002);
    }
    const svg = read('response.svg');
    expect(svg).toMatch(/measured: [^<]*measured\.csv<\/text>/);
    expect(svg.match(/data-measured="1"[^>]*>(.*?)<\/g>/)![1]!.match(/<circle /g)).toHaveLength(29);
  });

  it('volts, and readings that do not reach everywhere, leave cells empty', async () => {
    const volts = saved(folder, 'volts.csv', 'Hz,V\n100,0.01\n1000,0.005\n5000,0.001\n');
    const { status, out } = await ran(['respond', plain, '--bypass', '470p', '--measured', volts, '--json']);
    expect(status).toBe(0);
    const { points } = JSON.parse(out).measured;
    // between 100 Hz and 1 kHz, 0 and −6.02 dB: 0.602 of the decade is 400 Hz
    expect(points[0].decibels).toBeCloseTo(6.0206 * Math.log10(4), 4);
    const { out: text } = await ran(['respond', plain, '--bypass', '470p', '--measured', volts]);
    const section = text.slice(text.indexOf('### Measured'), text.indexOf('### Corners'));
    expect(section).not.toMatch(/^\| (80|6300) \|/m);
    expect(section).toMatch(/^\| 5000 \| -16\.\d \| -?[\d.]+ \|$/m);
    expect(section).toMatch(/^\| rms \| {2}\| [\d.]+ \|$/m);
  });
});

describe('what is wrong is told, and nothing is answered', () => {
  const cases: [string, readonly string[], ...string[]][] = [
    ['no question', ['bypass'], '--until', '--fit'],
    ['two questions', ['bypass', '--until', 'corner 1 kHz', '--fit', 'x.csv'], 'a goal and a measurement'],
    ['a bad goal', ['bypass', '--until', 'corner 3.5 kV'], '"3.5 kV" after "corner"', 'corner 3.5 kHz'],
    ['an unknown part', ['bypas', '--until', 'corner 1 kHz'], '"bypas"', 'nearest: bypass', 'grid capacitor'],
    ['a part with no scale', ['tube', '--until', 'corner 1 kHz'], '"tube"', 'detector.tube has no value'],
    ['a part that is not there', ['ratio', '--until', 'corner 1 kHz'], '"ratio"', 'a part of this circuit'],
    [
      'two parts, one goal',
      ['bypass,leak', '--until', 'corner 1 kHz'],
      '2 parts and 1 goal',
      'two parts for two goals',
    ],
    ['one part, two goals', ['bypass', '--until', 'corner 1 kHz; plate 45 V'], '1 part and 2 goals'],
    ['one part twice', ['bypass,bypass', '--until', 'corner 1 kHz; plate 45 V'], 'different ones'],
    [
      'loudest with two',
      ['bypass,leak', '--until', 'loudest; plate 45 V'],
      'two goals that each give a figure a value',
    ],
    [
      'a bad drawer',
      ['bypass', '--until', 'corner 1 kHz', '--drawer', '47p,100x'],
      '--drawer, bypass',
      '100x',
      'a capacitance',
    ],
    ['a drawer of ohms', ['bypass', '--until', 'corner 1 kHz', '--drawer', '47k'], '47k', 'a capacitance'],
    ['an empty place in it', ['bypass', '--until', 'corner 1 kHz', '--drawer', '47p,,1n'], '--drawer', 'found nothing'],
    ['an empty drawer', ['bypass', '--until', 'corner 1 kHz', '--drawer', ''], '--drawer', '47p,100p,150p'],
    ['one drawer for two', ['bypass,leak', '--fit', 'x.csv', '--drawer', '47p'], 'values for each of bypass, leak'],
    ['a series that is none', ['bypass', '--until', 'corner 1 kHz', '--series', 'E13'], '"E13"', 'E6, E12, E24'],
    ['both', ['bypass', '--until', 'corner 1 kHz', '--series', 'E6', '--drawer', '47p'], 'one of them'],
    [
      'a range upside down',
      ['bypass', '--until', 'corner 1 kHz', '--between', '1n,10p'],
      '--between, bypass',
      'the lower',
    ],
    ['a range of one', ['bypass', '--until', 'corner 1 kHz', '--between', '1n'], 'two values'],
    ['no carrier', ['bypass', '--level', '0 V', '--until', 'corner 1 kHz'], 'station.level', 'a carrier'],
    ['no such measurement', ['bypass', '--fit', 'nowhere.csv'], 'no file nowhere.csv'],
    ['a list with a fault', ['bypass', 'BAD', '--until', 'corner 1 kHz'], ':1:', 'plate.suply'],
  ];

  it.each(cases)('%s', async (_, argv, ...named) => {
    const bad = saved(folder, 'bad.yaml', 'plate: { suply: 90 }\n');
    const before = listing(folder);
    const { status, out, err } = await ran(['choose', ...argv.map((word) => (word === 'BAD' ? bad : word))]);
    for (const words of named) expect(err.toLowerCase()).toContain(words.toLowerCase());
    expect(err).not.toMatch(/^\s+at |\bError\b|node:|fault of the program|undefined|NaN|\[object|\.ts\b/m);
    expect(status).toBe(2);
    expect(out).toBe('');
    expect(listing(folder)).toEqual(before);
  });

  it('readings too few for so many parts, and volts that do not reach 400 Hz', async () => {
    const few = saved(folder, 'few.csv', '100,0\n400,0\n5000,-12\n');
    const many = await ran(['choose', 'bypass,leak', list, '--fit', few]);
    expect(many.status).toBe(2);
    expect(many.err).toContain('3 readings');
    expect(many.err).toContain('4 or more');
    const high = saved(folder, 'high.csv', 'Hz,V\n1000,1\n5000,0.1\n');
    const unreferred = await ran(['respond', list, '--measured', high]);
    expect(unreferred.status).toBe(2);
    expect(unreferred.err).toContain('400 Hz');
    mkdirSync(at('folder'));
    const directory = await ran(['respond', list, '--measured', at('folder')]);
    expect(directory.status).toBe(2);
    expect(directory.err).toContain('--measured');
  });
});
