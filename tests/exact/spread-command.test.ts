import { execFileSync } from 'node:child_process';
import { mkdirSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { Resvg } from '@resvg/resvg-js';
import { beforeAll, describe, expect, it } from 'vitest';
import { openPool } from '../../src/cli/worker/pool.ts';
import { InputError } from '../../src/engine/errors.ts';
import type { SpreadResult } from '../../src/results/spread-result.ts';
import { ROOT } from '../guards/source-files.ts';
import { freshFolder, listing, type Ran, ran, saved } from './command-run.ts';

/** A stiff source, for which a circuit takes least time. */
const LIST = 'tuned circuit: { loaded Q: 40 }\nplate: { bypass: 470 pF ±20 % }\n';
const folder = freshFolder();
const list = saved(folder, 'set.yaml', LIST);
const spread = (...flags: string[]): Promise<Ran> => ran(['spread', list, '--runs', '50', ...flags]);
const parsed = ({ out }: Ran): SpreadResult => JSON.parse(out) as SpreadResult;

describe('the bytes of a spread', () => {
  let command = '';
  let worker = '';
  beforeAll(() => {
    const build = join(folder, 'build');
    execFileSync(process.execPath, [join(ROOT, 'tests', 'tools', 'build.mjs'), build]);
    command = join(build, 'presolder.mjs');
    worker = join(build, 'worker.mjs');
  });

  it('are the same with 1, 2 and 4 workers, and from the sources', async () => {
    const sets = ['1', '2', '4'].map((workers) => {
      const out = join(folder, `out-${workers}`);
      const flags = ['--runs', '60', '--workers', workers, '--json', '--out', out, '--quiet'];
      const text = execFileSync(process.execPath, [command, 'spread', list, ...flags], { encoding: 'utf8' });
      return [text, ...listing(out)];
    });
    expect(sets[0]).toHaveLength(5);
    expect(sets[1]).toEqual(sets[0]);
    expect(sets[2]).toEqual(sets[0]);
    expect((await ran(['spread', list, '--runs', '60', '--json'])).out).toBe(sets[0]![0]);
  });

  it('come from workers that fail one job at a time, and take none once closed', async () => {
    const pool = await openPool(2, worker);
    expect(pool.workers).toBe(2);
    try {
      const noCircuit = pool.run('circuits', { circuit: {} as never, parts: [], factors: [[]] });
      const failure: unknown = await noCircuit.catch((error: unknown) => error);
      // a fault of the program stays one: no circuit, no plate
      expect(failure).toBeInstanceOf(Error);
      expect(failure).not.toBeInstanceOf(InputError);
      await expect(pool.run('circuits', { circuit: {} as never, parts: [], factors: [] })).resolves.toEqual([]);
    } finally {
      await pool.close();
    }
    await expect(pool.run('circuits', { circuit: {} as never, parts: [], factors: [] })).rejects.toThrow();
  });

  it('depend on the seed, and on nothing else', async () => {
    const [first, again, other] = [
      await spread('--json'),
      await spread('--json'),
      await spread('--json', '--seed', '2'),
    ];
    expect(again.out).toBe(first.out);
    expect(parsed(other).variants[0]!.response).not.toEqual(parsed(first).variants[0]!.response);
    // what is not drawn is the same
    expect(parsed(other).variants[0]!.parts.map((part) => part.atMost)).toEqual(
      parsed(first).variants[0]!.parts.map((part) => part.atMost),
    );
  });

  it('of one variant are the same beside others: all meet the same draws', async () => {
    const both = parsed(await spread('--json', '--bypass', '100p,470p ±20 %'));
    const own = parsed(await spread('--json'));
    expect(both.variants).toHaveLength(2);
    expect(both.variants[1]!.response).toEqual(own.variants[0]!.response);
  });
});

describe('presolder spread', () => {
  it('tells bands, ends, corners and shares in plain tables', async () => {
    const { status, out, err } = await ran(['spread', list, '--runs', '100']);
    expect([status, err]).toEqual([0, '']);
    expect(out).toMatch(/^100 random circuits, seed 1\./);
    expect(out).toMatch(/^bypass +470 pF +±20 % +list +\d+ % +\d+ %$/m);
    expect(out).toMatch(/^leak +2\.2 MΩ +-10\/\+30 % +old +\d+ % +\d+ %$/m);
    expect(out).toMatch(/^tube, current and slope +- +±25 % +old/m);
    expect(out).toMatch(/^audio, rms( +[\d.]+ mV){6}$/m);
    expect(out).toMatch(/^ +5000( +-[\d.]+){6}$/m);
    expect(out).toMatch(/^bypass +376 pF +\+\d\.\d +[-+]?\d\.\d +564 pF +-\d\.\d +[-+]?\d\.\d$/m);
    expect(out).toMatch(/^dullest +-[\d.]+ /m);
    expect(out).toMatch(/^Most of the spread at 5 kHz: .+, \d+ %\.$/m);
    expect(out).toMatch(/^Caution: /m);
    expect(out).not.toMatch(/NaN|undefined|Infinity/);
  });

  it('has closer bands with new parts, and none where nothing varies', async () => {
    const width = (result: SpreadResult): number => {
      const row = result.variants[0]!.response.find(({ hertz }) => hertz === 5000)!;
      return row.high95! - row.low5!;
    };
    const [old, fresh] = [parsed(await spread('--json')), parsed(await spread('--json', '--parts', 'new'))];
    expect(width(fresh)).toBeLessThan(width(old));
    const exact = ['detector.grid capacitor=150p', 'detector.leak=2M2', 'plate.bypass=470p', 'plate.load=220k']
      .concat(['output.coupling=10n', 'output.load resistance=1M', 'detector.tube=6SL7-GT'])
      .concat('tube.grid current.at zero volts=10u')
      .flatMap((setting) => ['--set', `${setting} ±0 %`]);
    const still = parsed(await spread('--json', ...exact));
    expect(still.variants[0]!.parts).toEqual([]);
    expect(width(still)).toBe(0);
    const { status, out } = await spread(...exact);
    expect(status).toBe(0);
    expect(out).toContain('No part of this circuit varies.');
  });

  it('has no corner where the response does not fall', async () => {
    // little capacitance, low resistances, a coupling of microfarads: corners beyond 16 kHz and below 1 Hz
    const wide = saved(
      folder,
      'wide.yaml',
      'tuned circuit: { loaded Q: 5 }\ndetector: { leak: 20k, grid capacitor: 20p, law: square }\n' +
        'plate: { bypass: 0, load: 5k }\noutput: { coupling: 10u, load capacitance: 0 }\n',
    );
    const { out } = await ran(['spread', wide, '--runs', '50', '--json']);
    const { highCornerHertz, lowCornerHertz } = (JSON.parse(out) as SpreadResult).variants[0]!;
    expect(highCornerHertz).toEqual(
      Object.fromEntries(['nominal', 'mean', 'least', 'low5', 'median', 'high95', 'most'].map((key) => [key, null])),
    );
    expect(lowCornerHertz.nominal).toBeNull();
    expect((await ran(['spread', wide, '--runs', '50'])).out).toMatch(/^high corner, -3 dB( +above 16 kHz){6}$/m);
  });

  it('writes four files as one set, and replaces only such', async () => {
    const out = join(folder, 'set');
    expect((await spread('--out', out)).err).toBe(`Wrote tables and plot to ${out}\n`);
    const first = listing(out);
    expect(readdirSync(out).sort()).toEqual(['spread.csv', 'spread.json', 'spread.md', 'spread.svg']);
    expect((await spread('--out', out)).err).toBe(`Replaced the earlier results in ${out}\n`);
    expect(listing(out)).toEqual(first);
    saved(out, 'notes.txt', 'mine');
    const refused = await spread('--out', out);
    expect(refused.status).toBe(2);
    expect(refused.err).toContain('notes.txt');
    expect(listing(out)).toHaveLength(5);
    const other = join(folder, 'other');
    mkdirSync(other);
    saved(other, 'spread.json', '{}');
    expect((await spread('--out', other)).status).toBe(2);
  });

  it('plots and tables every variant', async () => {
    const out = join(folder, 'variants');
    expect((await spread('--out', out, '--bypass', '47p,2n2 +-20 %', '--quiet')).status).toBe(0);
    const text = (name: string): string => readFileSync(join(out, name), 'utf8');
    const svg = text('spread.svg');
    expect(svg.match(/data-spread="band"/g)).toHaveLength(2);
    expect(svg.match(/data-spread="nominal"/g)).toHaveLength(2);
    expect(svg).not.toMatch(/<script|href=|NaN/);
    expect(new Resvg(svg).render().width).toBe(960);
    const rows = text('spread.csv').split('\r\n');
    expect(rows).toHaveLength(31);
    expect(new Set(rows.slice(0, 30).map((row) => row.split(',').length))).toEqual(new Set([15]));
    const { variants } = JSON.parse(text('spread.json')) as SpreadResult;
    const at5000 = rows
      .find((row) => row.startsWith('5000,'))!
      .split(',')
      .map(Number);
    const row = variants[1]!.response.find(({ hertz }) => hertz === 5000)!;
    expect(at5000.slice(8)).toEqual([row.nominal, row.mean, row.low5, row.median, row.high95, row.least, row.most]);
    expect(text('spread.md').match(/^### bypass/gm)).toHaveLength(2);
    expect(text('spread.md').match(/^\| 5000 \|/gm)).toHaveLength(2);
  });

  it.each([
    ['--runs', '49'],
    ['--runs', '100001'],
    ['--runs', '1e3'],
    ['--runs', 'many'],
    ['--seed', '-1'],
    ['--seed', '9007199254740993'],
    ['--workers', '0'],
    ['--workers', '65'],
    ['--parts', 'used'],
    ['--bypass', '100p ±20'],
    ['--set', 'station.level=60 mV ±5 %'],
  ])('refuses %s %s and writes nothing', async (flag, value) => {
    const before = listing(folder);
    const { status, out, err } = await ran(['spread', list, '--out', join(folder, 'never'), flag, value]);
    expect([status, out]).toEqual([2, '']);
    expect(err).toContain(flag);
    expect(listing(folder)).toEqual(before);
  });

  it('stops when asked, and leaves nothing', async () => {
    const before = listing(folder);
    let asked = 0;
    const stop = (): boolean => ++asked > 3;
    const { status, out, err } = await ran(['spread', list, '--out', join(folder, 'never')], stop);
    expect([status, out, err]).toEqual([130, '', 'Stopped; nothing was written.\n']);
    expect(asked).toBeLessThan(10);
    expect(listing(folder)).toEqual(before);
  });

  it('shows progress on a terminal only', async () => {
    const shown = await ran(['spread', list, '--runs', '50'], () => false, true);
    expect(shown.err).toContain('spreading');
    expect((await spread()).err).toBe('');
  });
});
