import { describe, expect, it } from 'vitest';
import { responseCsv } from '../../src/results/response-csv.ts';
import { markdownText, responseMarkdown } from '../../src/results/response-markdown.ts';
import type { Result } from '../../src/results/result.ts';
import { resultJson } from '../../src/results/result-json.ts';
import { sampleResult, sampleVariant } from './sample-result.ts';

const NASTY = [
  '=1+1',
  '+cmd|x',
  '-2.2 M',
  '@SUM(A1)',
  'a "quoted", name',
  'two\nlines\r\nhere',
  '\t=tab',
  'x;=semicolon',
  'pipe | [link](http://x.test) <b>*bold*</b> `code` & _it_',
  'µ Ω 日本',
];
const result = sampleResult([sampleVariant('as found', 60, 1500), sampleVariant('restored', 50, 4000)]);
const nasty = sampleResult(NASTY.map((name, i) => sampleVariant(name, 40 + i, 1000 + 300 * i)));

/** RFC 4180 read back, written for this test: the separator may be another, as some spreadsheets have it. */
function parseCsv(text: string, separator = ','): string[][] {
  const rows: string[][] = [[]];
  let cell = '';
  let quoted = false;
  for (let i = 0; i < text.length; i++) {
    const letter = text[i]!;
    if (quoted && letter === '"' && text[i + 1] === '"') {
      cell += '"';
      i++;
    } else if (quoted) {
      if (letter === '"') quoted = false;
      else cell += letter;
    } else if (letter === '"' && cell === '') quoted = true;
    else if (letter === separator || letter === '\n') {
      rows.at(-1)!.push(cell.replace(/\r$/, ''));
      cell = '';
      if (letter === '\n') rows.push([]);
    } else cell += letter;
  }
  return rows.slice(0, -1);
}

describe('the CSV table', () => {
  it('gives every number back unrounded, one row a frequency, seven columns a variant', () => {
    const [heading, ...rows] = parseCsv(responseCsv(result));
    expect(heading).toHaveLength(1 + 7 * 2);
    expect(rows.map((row) => row.map(Number))).toEqual(
      result.variants[0]!.response.map((row, i) => [
        row.hertz,
        ...result.variants.flatMap((variant) => {
          const r = variant.response[i]!;
          const { tunedCircuit, gridCapacitor, plateBypass, load } = r.cost;
          return [
            r.decibels,
            r.phaseDegrees,
            r.voltsRmsAt30Percent,
            tunedCircuit,
            gridCapacitor,
            plateBypass,
            load,
          ].map(
            // a table of text has no negative zero
            (value) => value + 0,
          );
        }),
      ]),
    );
  });

  it('has units and the variant in every heading, and lines ended by CR LF', () => {
    const text = responseCsv(result);
    const heading = parseCsv(text)[0]!;
    expect(heading[0]).toBe('frequency (Hz)');
    for (const cell of heading.slice(1))
      expect(cell).toMatch(/\((dB re 400 Hz|degrees|V rms|dB)\): (as found|restored)$/);
    expect(text.split('\r\n')).toHaveLength(1 + 29 + 1);
    expect(text.replaceAll('\r\n', '')).not.toMatch(/[\r\n]/);
  });

  it('lets no name become a formula, whether cells end at commas, semicolons or tabs', () => {
    const text = responseCsv(nasty).replace(/^\ufeff/, '');
    for (const separator of [',', ';', '\t']) {
      for (const cell of parseCsv(text, separator).flat()) {
        if (/^\s*["']?\s*[=+\-@]/.test(cell))
          expect(cell.split(',').every((c) => Number.isFinite(Number(c)))).toBe(true);
      }
    }
  });

  it('keeps names whole but for line ends, tabs and semicolons', () => {
    const heading = parseCsv(responseCsv(nasty).replace(/^\ufeff/, ''))[0]!;
    const names = NASTY.map((_, i) => heading[1 + 7 * i]!.replace('response (dB re 400 Hz): ', ''));
    expect(names.slice(0, 6)).toEqual(['=1+1', '+cmd|x', '-2.2 M', '@SUM(A1)', 'a "quoted", name', 'two lines here']);
    expect(names.slice(6, 8)).toEqual(['=tab', 'x,=semicolon']);
  });

  it('starts with a byte order mark only when a name needs it', () => {
    expect(responseCsv(nasty).startsWith('\ufeff')).toBe(true);
    expect(responseCsv(result).startsWith('\ufeff')).toBe(false);
  });

  it('leaves the cells of a frequency that one variant lacks empty', () => {
    const short = { ...sampleVariant('short', 50, 2000), response: sampleVariant('', 50, 2000).response.slice(3) };
    const rows = parseCsv(responseCsv(sampleResult([sampleVariant('all', 50, 2000), short])));
    expect(rows).toHaveLength(30);
    expect(rows[1]!.slice(8)).toEqual(Array(7).fill(''));
    expect(rows[4]!.slice(8).every((cell) => cell !== '')).toBe(true);
  });
});

/** The cells of every table row under a heading; an escaped border is no border. */
function tableUnder(markdown: string, title: string): string[][] {
  const section = markdown.split('### ').find((part) => part.startsWith(`${title}\n`)) ?? '';
  return section
    .split('\n')
    .filter((line) => line.startsWith('|'))
    .map((line) =>
      line
        .slice(1, -1)
        .split(/(?<!\\)\|/)
        .map((cell) => cell.trim()),
    );
}

describe('the Markdown tables', () => {
  const markdown = responseMarkdown(result);

  it('response: every third octave, decibels to half of the printed tenth', () => {
    const [heading, rule, ...rows] = tableUnder(markdown, 'Response');
    expect(heading).toEqual(['Hz', 'as found', 'restored']);
    expect(rule).toEqual(['---', '---:', '---:']);
    expect(rows).toHaveLength(29);
    for (const [i, row] of rows.entries()) {
      expect(Number(row[0])).toBe(result.variants[0]!.response[i]!.hertz);
      for (const [v, variant] of result.variants.entries()) {
        // half of the last printed digit, and the rounding of the subtraction
        expect(Math.abs(Number(row[v + 1]) - variant.response[i]!.decibels)).toBeLessThanOrEqual(0.05 + 1e-12);
        expect(row[v + 1]).not.toBe('-0.0');
      }
    }
  });

  it('rest point, corners, cost, distortion and sensitivity carry their units', () => {
    const cell = (title: string, row: string): string | undefined =>
      tableUnder(markdown, title).find((cells) => cells[0] === row)?.[1];
    expect(cell('Rest point', 'plate')).toBe('41.7 V');
    expect(cell('Rest point', 'plate current')).toBe('219.5 µA');
    expect(cell('Rest point', 'transconductance')).toBe('957 µS');
    expect(cell('Rest point', 'plate resistance')).toBe('71.23 kΩ');
    expect(cell('Corners', 'low')).toBe('60 Hz');
    expect(cell('Corners', 'high')).toBe('1.5 kHz');
    const cost = result.variants[0]!.response.find((row) => row.hertz === 5000)!.cost;
    expect(cell('Cost by part at 5 kHz', 'plate bypass')).toBe(cost.plateBypass.toFixed(1));
    // 0.1234 · 30 = 3.702 and 0.1241 · 80 = 9.928, the sample's own figures
    expect(cell('Distortion', '400 Hz, 30 % modulation, second')).toBe('3.7 %');
    expect(cell('Distortion', '1 kHz, 80 % modulation, total')).toBe('9.93 %');
    // 12.3 · 0.05² = 0.03075
    expect(cell('Sensitivity', '50 mV, audio rms')).toMatch(/^30\.[78] mV$/);
  });

  it('a corner that is not reached says so', () => {
    expect(tableUnder(responseMarkdown(sampleResult([sampleVariant('flat', 0, 0)])), 'Corners').slice(2)).toEqual([
      ['low', 'not reached'],
      ['high', 'not reached'],
    ]);
  });

  it('every row has as many cells as there are variants, whatever their names', () => {
    const text = responseMarkdown(nasty);
    for (const title of ['Response', 'Corners', 'Cost by part at 5 kHz', 'Rest point', 'Distortion', 'Sensitivity']) {
      const rows = tableUnder(text, title);
      expect(rows.length).toBeGreaterThan(2);
      for (const row of rows) expect(row).toHaveLength(1 + NASTY.length);
    }
  });

  it('names and cautions cannot become markup', () => {
    expect(markdownText('a | [x](http://y) <b>*z*</b> `c` & _d_')).toBe(
      'a \\| \\[x\\](http\\://y) &lt;b&gt;\\*z\\*&lt;/b&gt; \\`c\\` &amp; \\_d\\_',
    );
    expect(responseMarkdown(nasty)).not.toMatch(/<b>|(?<!\\)\[link|http:\/\//);
    expect(markdown.match(/can shock/g)).toHaveLength(1);
  });
});

describe('the result file', () => {
  it('gives the same values back, unrounded', () => {
    expect(JSON.parse(resultJson(result))).toEqual(JSON.parse(JSON.stringify(result)));
    expect(JSON.parse(resultJson(result)).variants[1].response[7].decibels).toBe(
      result.variants[1]!.response[7]!.decibels,
    );
  });

  it.each([Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY])(
    'refuses %d and names where it is',
    (bad) => {
      const spoiled = (change: Partial<Result['variants'][number]>): Result =>
        sampleResult([result.variants[0]!, { ...result.variants[1]!, ...change }]);
      const response = result.variants[1]!.response.map((row, i) =>
        i === 4 ? { ...row, cost: { ...row.cost, load: bad } } : row,
      );
      expect(() => resultJson(spoiled({ response }))).toThrow(
        `internal: result.variants[1].response[4].cost.load is ${bad}`,
      );
      expect(() => resultJson(spoiled({ lowCornerHertz: bad }))).toThrow('result.variants[1].lowCornerHertz');
    },
  );
});
