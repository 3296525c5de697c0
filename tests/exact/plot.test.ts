import { Resvg } from '@resvg/resvg-js';
import { describe, expect, it } from 'vitest';
import { decibelRange, makePanel } from '../../src/results/plot-axes.ts';
import { curvePath, variantStyle } from '../../src/results/plot-curves.ts';
import { tagPlaces } from '../../src/results/plot-tags.ts';
import { responseSvg } from '../../src/results/response-plot.ts';
import { fitText, textWidth } from '../../src/results/svg-text.ts';
import { sampleResult, sampleVariant } from './sample-result.ts';

const svgOf = (...names: readonly string[]): string =>
  responseSvg(sampleResult(names.map((name, i) => sampleVariant(name, 30 + 5 * i, 1000 + 700 * i))));
const count = (text: string, pattern: RegExp): number => [...text.matchAll(pattern)].length;

/** Names that would break out of XML, layout or reading order if they could. */
const NASTY = [
  '</text><script>alert(1)</script>',
  `" onload="x" '&amp;<![CDATA[`,
  'nul\u0000 bell\u0007 half \ud800 none \uffff turned \u202e',
  'W'.repeat(400),
  '日本語😀👩‍👩‍👧e\u0301',
  '',
];

describe('the response plot', () => {
  it.each([1, 2, 4, 5, 24])('%i variants: one curve each, and their cost', (n) => {
    const svg = svgOf(...Array.from({ length: n }, (_, i) => `variant ${i + 1}`));
    expect(count(svg, /<path data-variant="\d+" d="M[^"]+"/g)).toBe(n);
    expect(count(svg, /<path data-cost-of="\d+" data-part="[^"]+" d="M[^"]+"/g)).toBe(4 * (n <= 4 ? n : 2));
    expect(svg.includes('first and the last of')).toBe(n > 4);
    for (const part of ['tuned circuit', 'grid capacitor', 'plate bypass', 'load and coupling']) {
      expect(svg).toContain(`>${part}</text>`);
    }
  });

  it('is well-formed XML of the size it states, whatever the names', () => {
    const svg = svgOf(...NASTY);
    const picture = new Resvg(svg, { font: { loadSystemFonts: false } });
    expect(picture.width).toBe(960);
    expect(picture.height).toBe(Number(/height="(\d+)"/.exec(svg)![1]));
    expect(svg).toContain('&lt;/text&gt;&lt;script&gt;');
    expect(svg).not.toMatch(/<script|<!\[CDATA|\sonload="/);
    expect(svg).not.toMatch(/(?!\n)[\p{Cc}\p{Cs}\p{Cf}\p{Noncharacter_Code_Point}]/u);
    expect(svg).toContain('(no name)');
  });

  it('refers to nothing outside, runs nothing and holds no NaN', () => {
    const svg = svgOf('one', 'two');
    expect(svg).not.toMatch(/href|url\(|@import|<style|<script|<image|<foreignObject|NaN|Infinity|undefined|null/);
    expect(count(svg, /https?:/g)).toBe(1);
    expect(svg).toContain('xmlns="http://www.w3.org/2000/svg"');
  });

  it('labels 20 Hz to 20 kHz in the 1-2-5 row, and the 0 dB and −3 dB lines', () => {
    const svg = svgOf('one');
    for (const label of ['20', '50', '100', '200', '500', '1k', '2k', '5k', '10k', '20k', '0 dB', '−3 dB']) {
      expect(svg).toContain(`>${label}</text>`);
    }
    // 28 lines of frequency (2 to 9 of tens, 1 to 9 of hundreds and thousands, 10 and 20 k) in each of the two panels
    expect(count(svg, /<line x1="([\d.]+)" y1="[\d.]+" x2="\1"/g)).toBe(2 * 28);
  });

  it('is the same text for the same result', () => {
    expect(svgOf('a', 'b')).toBe(svgOf('a', 'b'));
  });

  it('refuses a number that is none, as a fault of the program', () => {
    const variant = sampleVariant('x', 30, 1000);
    const response = variant.response.map((row, i) => (i === 3 ? { ...row, decibels: Number.NaN } : row));
    expect(() => responseSvg(sampleResult([{ ...variant, response }]))).toThrow(/^internal/);
  });
});

describe('curves are told apart without colour', () => {
  it('no two of 24 share colour and dashes; the first eight have eight dashes', () => {
    const styles = Array.from({ length: 24 }, (_, i) => variantStyle(i));
    expect(new Set(styles.map((style) => `${style.colour} ${style.dash}`)).size).toBe(24);
    expect(new Set(styles.slice(0, 8).map((style) => style.dash)).size).toBe(8);
  });

  it('24 curves carry 24 numbers that do not touch, even when all run together', () => {
    const panel = makePanel({ left: 64, top: 0, width: 836, height: 380 }, { low: -6, high: 3, step: 1 });
    const flat = Array.from({ length: 24 }, () => sampleVariant('flat', 0, 0).response);
    const places = tagPlaces(flat, panel);
    for (const [i, a] of places.entries()) {
      for (const b of places.slice(i + 1)) {
        // rings of 7.5 px radius and 1.5 px stroke touch at 16.5 px
        expect(Math.hypot(a!.x - b!.x, a!.y - b!.y)).toBeGreaterThan(16.5);
      }
    }
  });
});

describe('scales', () => {
  const least = { low: -6, high: 3 };
  const most = { low: -60, high: 40 };

  it.each([
    [[0, 0], { low: -6, high: 3, step: 1 }],
    [[-20.1, 0.2], { low: -21, high: 3, step: 3 }],
    [[-24.2, 0.4], { low: -27, high: 3, step: 6 }],
    [[-400, 2], { low: -60, high: 5, step: 10 }],
    [[-3, 90], { low: -6, high: 42, step: 6 }],
  ])('%j spans %j', (values, range) => {
    expect(decibelRange(values, least, most, 9)).toEqual(range);
  });

  it('a curve ends where it leaves the panel and comes back where it returns', () => {
    const panel = makePanel({ left: 0, top: 0, width: 300, height: 60 }, { low: -60, high: 0, step: 10 });
    const points = [20, 200, 2000, 20_000].map((hertz, i) => ({ hertz, decibels: [-30, -90, -90, -30][i]! }));
    // 20 Hz to 20 kHz over 300 px: 100 px a decade; −60 dB is crossed half-way between −30 and −90, at 50 and 250 px
    expect(curvePath(points, panel)).toBe('M0,30L50,60M250,60L300,30');
    expect(curvePath(points.slice(1, 3), panel)).toBe('');
  });

  it('a curve across the whole range between two points keeps the part within', () => {
    const panel = makePanel({ left: 0, top: 0, width: 300, height: 60 }, { low: -60, high: 0, step: 10 });
    const points = [
      { hertz: 20, decibels: 30 },
      { hertz: 20_000, decibels: -90 },
    ];
    // 120 dB over 300 px: 0 dB at 75 px, −60 dB at 225 px
    expect(curvePath(points, panel)).toBe('M75,0L225,60');
  });
});

describe('names in the legend', () => {
  it('keep their start and end where they are too long', () => {
    const fitted = fitText(`${'a'.repeat(80)} 100 pF ${'b'.repeat(80)}`, 13, 300);
    expect(fitted).toMatch(/^a+…b+$/);
    expect(textWidth(fitted, 13)).toBeLessThanOrEqual(300);
    expect(fitText('short', 13, 300)).toBe('short');
  });

  it('never cut a letter made of several characters', () => {
    const family = '👩‍👩‍👧';
    // joiners are marks without a picture of their own and become spaces, so the three stand apart
    expect(fitText(family.repeat(100), 13, 200)).not.toMatch(
      /[\ud800-\udbff](?![\udc00-\udfff])|(?<![\ud800-\udbff])[\udc00-\udfff]/,
    );
  });
});
