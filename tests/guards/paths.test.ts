import { describe, expect, it } from 'vitest';
import { partsListSchema } from '../../src/list/json-schema.ts';
import { starterList } from '../../src/list/starter.ts';
import { responseCsv } from '../../src/results/response-csv.ts';
import { responseMarkdown } from '../../src/results/response-markdown.ts';
import { responseSvg } from '../../src/results/response-plot.ts';
import { resultJson } from '../../src/results/result-json.ts';
import { sampleResult, sampleVariant } from '../exact/sample-result.ts';
import { filesUnder, textOf } from './source-files.ts';

describe('paths', () => {
  // words of the terminal that hold a slash and are no paths
  const WORDS = /A\/V|k\/V|Ω\/V|@audio|https?:|\/V\b/;
  const lines = filesUnder('src/cli').flatMap((path) =>
    textOf(path)
      .split('\n')
      .map((line) => ({ path, line }))
      .filter(({ line }) => !/^\s*(\/\/|\*|\/\*)|^import |import\('|^\s*presolder /.test(line) && !WORDS.test(line)),
  );

  it('are put together by the platform’s rule, never with a slash', () => {
    const glued = lines.filter(({ line }) => /\}\/|\/\$\{|'\/'|"\/"|\+ '\/|\/' \+/.test(line));
    expect(glued).toEqual([]);
  });

  it('are taken apart by the platform’s rule too', () => {
    expect(lines.filter(({ line }) => /(split|lastIndexOf|indexOf)\(['"/]\/?['"/]\)?/.test(line))).toEqual([]);
  });

  it('the rule finds what it looks for', () => {
    const planted = ['`$' + '{folder}/x.wav`', "folder + '/x'", "join.split('/')"];
    expect(planted.map((line) => /\}\/|\/\$\{|'\/'|"\/"|\+ '\/|\/' \+/.test(line))).toEqual([true, true, true]);
  });
});

describe('line ends', () => {
  const result = sampleResult([sampleVariant('as found', 50, 2000), sampleVariant('restored', 60, 5000)]);
  const bare = (text: string): boolean => /(?<!\r)\n/.test(text);

  it('a CSV table has CR LF, as RFC 4180 (from memory) has it', () => {
    const csv = responseCsv(result);
    expect(csv.split('\r\n').length).toBeGreaterThan(20);
    expect(bare(csv)).toBe(false);
    expect(csv.endsWith('\r\n')).toBe(true);
  });

  it('every other text has LF alone', () => {
    const texts = {
      markdown: responseMarkdown(result),
      json: resultJson(result),
      svg: responseSvg(result),
      list: starterList(),
      schema: JSON.stringify(partsListSchema(), null, 2),
    };
    for (const [name, text] of Object.entries(texts)) {
      expect(text.includes('\r'), name).toBe(false);
      expect(bare(text), name).toBe(true);
    }
  });

  it('no text is written by the platform’s own line end', () => {
    const files = [...filesUnder('src/cli'), ...filesUnder('src/results')];
    expect(files.filter((path) => /\bEOL\b/.test(textOf(path)))).toEqual([]);
  });
});
