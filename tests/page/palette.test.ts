import { describe, expect, it } from 'vitest';
import { lineClass } from '../../src/page/response-drawing.ts';
import { textOf } from '../guards/source-files.ts';

type Three = readonly [number, number, number];

/** The colours of the light and the dark look, by their names in the style sheet. */
const looks = [...textOf('src/page/page.css').matchAll(/:root \{([^}]*)\}/g)]
  .slice(0, 2)
  .map((block) => new Map([...block[1]!.matchAll(/--([\w-]+): (#[0-9a-f]{6})/g)].map((one) => [one[1]!, one[2]!])));

/** Linear light of a colour (sRGB, IEC 61966-2-1, from memory). */
function linear(colour: string): Three {
  const channel = (at: number): number => {
    const value = Number.parseInt(colour.slice(at, at + 2), 16) / 255;
    return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
  };
  return [channel(1), channel(3), channel(5)];
}

/** Contrast ratio, WCAG 2.2 (from memory). */
function contrast(a: string, b: string): number {
  const bright = (colour: string): number => {
    const [red, green, blue] = linear(colour);
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue + 0.05;
  };
  return Math.max(bright(a), bright(b)) / Math.min(bright(a), bright(b));
}

/**
 * Full colour sight, and none of red, green or blue cones: Machado, Oliveira, Fernandes, A physiologically-based model for
 * simulation of color vision deficiency, IEEE Trans. Vis. Comput. Graph. 15, 2009, severity 1.0 (from memory).
 */
const SIGHTS: readonly (readonly number[])[] = [
  [1, 0, 0, 0, 1, 0, 0, 0, 1],
  [0.152286, 1.052583, -0.204868, 0.114503, 0.786281, 0.099216, -0.003882, -0.048116, 1.051998],
  [0.367322, 0.860646, -0.227968, 0.280085, 0.672501, 0.047413, -0.01182, 0.04294, 0.968881],
  [1.255528, -0.076749, -0.178779, -0.078411, 0.930809, 0.147602, 0.004733, 0.691367, 0.3039],
];

/** CIELAB (D65) of a colour as a sight sees it. */
function lab(colour: string, sight: readonly number[]): Three {
  const light = linear(colour);
  const [r, g, b] = [0, 1, 2].map((row) =>
    Math.max(
      0,
      Math.min(
        1,
        [0, 1, 2].reduce((sum, k) => sum + sight[3 * row + k]! * light[k]!, 0),
      ),
    ),
  ) as [number, number, number];
  const f = (t: number): number => (t > 0.008856 ? Math.cbrt(t) : 7.787 * t + 16 / 116);
  const x = f((0.4124 * r + 0.3576 * g + 0.1805 * b) / 0.95047);
  const y = f(0.2126 * r + 0.7152 * g + 0.0722 * b);
  const z = f((0.0193 * r + 0.1192 * g + 0.9505 * b) / 1.08883);
  return [116 * y - 16, 500 * (x - y), 200 * (y - z)];
}

function nearest(colours: readonly string[]): number {
  let least = Number.POSITIVE_INFINITY;
  for (const sight of SIGHTS) {
    const all = colours.map((colour) => lab(colour, sight));
    all.forEach((a, i) => {
      for (const b of all.slice(i + 1)) least = Math.min(least, Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]));
    });
  }
  return least;
}

describe.each([
  ['light', 0],
  ['dark', 1],
] as const)('the %s look', (_, k) => {
  const look = looks[k]!;
  const of = (name: string): string => look.get(name)!;
  const lines = [1, 2, 3, 4, 5, 6, 7, 8].map((n) => of(`c${n}`));
  const costs = [1, 2, 3, 4].map((n) => of(`k${n}`));

  it('has text of 4.5 to 1, and lines and edges of 3 to 1, at least', () => {
    // WCAG 2.2, 1.4.3 and 1.4.11
    for (const name of ['ink', 'soft', 'accent', 'mark']) {
      for (const ground of ['paper', 'field'])
        expect([name, contrast(of(name), of(ground)) >= 4.5]).toEqual([name, true]);
    }
    expect(contrast(of('on-accent'), of('accent'))).toBeGreaterThan(4.5);
    expect(contrast(of('accent'), of('grid'))).toBeGreaterThan(4.5);
    for (const colour of [of('edge'), ...lines, ...costs]) {
      expect([colour, contrast(colour, of('paper')) >= 3]).toEqual([colour, true]);
    }
  });

  it('has lines that every sight tells apart by colour alone', () => {
    // ten times a difference just seen in CIELAB (about 2.3: Mahy and others, 1994, from memory)
    expect(nearest(lines)).toBeGreaterThan(23);
    expect(nearest(costs)).toBeGreaterThan(23);
  });
});

describe('in black and white', () => {
  const css = textOf('src/page/page.css');
  const dashesOf = (name: string): string => {
    const rule = new RegExp(`\\.${name} \\{([^}]*)\\}`).exec(css)?.[1] ?? '';
    return /stroke-dasharray: ([^;]+)/.exec(rule)?.[1] ?? 'full';
  };

  it('eight lines, and the four of the costs, differ in their dashes', () => {
    const eight = Array.from({ length: 8 }, (_, n) => dashesOf(lineClass(n).split(' ')[1]!));
    expect(new Set(eight).size).toBe(8);
    expect(new Set([1, 2, 3, 4].map((n) => dashesOf(`cost-${n}`))).size).toBe(4);
  });

  it('no two of as many variants as there can be look alike', () => {
    expect(new Set(Array.from({ length: 24 }, (_, n) => lineClass(n))).size).toBe(24);
  });
});
