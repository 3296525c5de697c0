/** One section of a transfer curve: second-order, analogue. */
export type CurveSection =
  | { readonly kind: 'rolls off below' | 'rolls off above'; readonly hertz: number; readonly q: number }
  | { readonly kind: 'peak'; readonly hertz: number; readonly q: number; readonly decibels: number };

/** A point of a curve of the builder's own. */
export interface CurvePoint {
  readonly hertz: number;
  readonly decibels: number;
}

/** What the output is heard through, by sections or by points with straight lines over log frequency between them. */
export interface HearingCurve {
  readonly name: string;
  readonly sections: readonly CurveSection[];
  readonly points: readonly CurvePoint[] | null;
  readonly source: string;
}

const FROM_MEMORY = 'typical of the kind, from memory; common practice, no source for the figures';

function curve(name: string, sections: readonly CurveSection[], source = FROM_MEMORY): HearingCurve {
  return { name, sections, points: null, source };
}

/** Known curves; `flat` first. */
export const HEARING_CURVES: readonly HearingCurve[] = [
  curve('flat', [], 'exact'),
  curve(
    'ceramic earpiece',
    [
      { kind: 'rolls off below', hertz: 200, q: 0.7 },
      { kind: 'peak', hertz: 3000, q: 2, decibels: 8 },
      { kind: 'rolls off above', hertz: 8000, q: 0.7 },
    ],
    'range 200 to 8000 Hz: Crystal earplug, http://wiki.waggy.org/dokuwiki/electronics/crystal_earplug, seen; peak from memory',
  ),
  curve('crystal earpiece', [
    { kind: 'rolls off below', hertz: 300, q: 0.7 },
    { kind: 'peak', hertz: 2500, q: 3, decibels: 10 },
    { kind: 'rolls off above', hertz: 5000, q: 0.7 },
  ]),
  curve('magnetic phones', [
    { kind: 'rolls off below', hertz: 250, q: 0.6 },
    { kind: 'peak', hertz: 950, q: 5, decibels: 10 },
    { kind: 'peak', hertz: 2800, q: 4, decibels: 4 },
    { kind: 'rolls off above', hertz: 4000, q: 0.7 },
  ]),
  curve('horn loudspeaker', [
    { kind: 'rolls off below', hertz: 350, q: 1 },
    { kind: 'rolls off below', hertz: 250, q: 0.7 },
    { kind: 'peak', hertz: 800, q: 3, decibels: 6 },
    { kind: 'peak', hertz: 2000, q: 3, decibels: 4 },
    { kind: 'rolls off above', hertz: 3500, q: 0.7 },
  ]),
  curve('small cone', [
    { kind: 'rolls off below', hertz: 180, q: 1.2 },
    { kind: 'peak', hertz: 2800, q: 2, decibels: 4 },
    { kind: 'rolls off above', hertz: 5500, q: 0.7 },
  ]),
];

export const HEARING_NAMES: readonly string[] = HEARING_CURVES.map(({ name }) => name);

/** Lowest level a curve is followed to, dB: far below what is heard, and finite. */
const LEAST_DECIBELS = -120;

/** Level of a curve at a frequency above 0 Hz, dB, not referred to any frequency. */
export function curveDecibels(curve: HearingCurve, hertz: number): number {
  let decibels = curve.points === null ? 0 : betweenPoints(curve.points, hertz);
  for (const section of curve.sections) decibels += sectionDecibels(section, hertz);
  return Math.max(decibels, LEAST_DECIBELS);
}

function sectionDecibels(section: CurveSection, hertz: number): number {
  const x = hertz / section.hertz;
  const square = (1 - x * x) ** 2;
  const width = (x / section.q) ** 2;
  if (section.kind === 'peak') {
    const height = 10 ** (section.decibels / 20);
    return 10 * Math.log10((square + height * height * width) / (square + width));
  }
  const passed = section.kind === 'rolls off below' ? x ** 4 : 1;
  return 10 * Math.log10(Math.max(passed / (square + width), 1e-30));
}

function betweenPoints(points: readonly CurvePoint[], hertz: number): number {
  const first = points[0] as CurvePoint;
  const last = points[points.length - 1] as CurvePoint;
  if (hertz <= first.hertz) return first.decibels;
  if (hertz >= last.hertz) return last.decibels;
  const after = points.findIndex((point) => point.hertz > hertz);
  const [a, b] = [points[after - 1] as CurvePoint, points[after] as CurvePoint];
  return a.decibels + ((b.decibels - a.decibels) * Math.log(hertz / a.hertz)) / Math.log(b.hertz / a.hertz);
}
