import { area, curveMonotoneX } from 'd3-shape';
import { onePlainLine } from './plain-line.ts';
import { decibelRange, drawAxes, makePanel, type Panel } from './plot-axes.ts';
import { type CurveStyle, drawCurve, drawLineSample } from './plot-curves.ts';
import type { FigureRecord, SpreadResult, SpreadVariant } from './spread-result.ts';
import { escapeXml, fitText, px, ROOT_FONT, svgText, textWidth } from './svg-text.ts';

const WIDTH = 960;
const LEFT = 64;
const PLOT_WIDTH = 836;
const PANEL_HEIGHT = 340;
const PITCH = PANEL_HEIGHT + 78;

/** The band is told from the lines by being filled, the lines from each other by their dashes: colour is not needed. */
const BAND = { fill: '#b9cdf2', stroke: '#6f8fca' } as const;
const NOMINAL: CurveStyle = { colour: '#0c2fac', dash: '' };
const EXTREME: CurveStyle = { colour: '#7e2e44', dash: '5 2' };

type Row = SpreadVariant['response'][number];

/**
 * The band of responses over 20 Hz to 20 kHz, dB re each circuit's own 400 Hz: the nominal circuit's curve, what nine in
 * ten circuits lie between, and the outermost circuits, one panel a variant on a common scale, as one SVG picture without
 * scripts or outside references.
 *
 * @param result  at least one variant
 */
export function spreadSvg(result: SpreadResult): string {
  const { variants } = result;
  const values = variants.flatMap(({ response }) => response.flatMap((row) => [row.least ?? 0, row.most ?? 0]));
  const range = decibelRange(values, { low: -6, high: 3 }, { low: -60, high: 40 }, 9);
  const first = 116;
  const panels = variants.map((variant, k) => {
    const panel = makePanel({ left: LEFT, top: first + k * PITCH, width: PLOT_WIDTH, height: PANEL_HEIGHT }, range);
    return drawVariant(variant, panel);
  });
  const height = first + variants.length * PITCH - 32;
  const described = `Band of responses in dB re 400 Hz of ${variants.map((variant) => variant.name).join('; ')}.`;
  const drawn = `${result.runs} random circuits, seed ${result.seed}, ${result.parts} parts`;
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${WIDTH}" height="${height}" viewBox="0 0 ${WIDTH} ${height}" ` +
      `role="img" ${ROOT_FONT}>`,
    '<title>Spread of the audio response with the tolerances of the parts</title>',
    `<desc>${escapeXml(described)}</desc>`,
    `<rect width="${WIDTH}" height="${height}" fill="#ffffff"/>`,
    svgText(LEFT, 32, 'Audio at the output, relative to 400 Hz: what tolerances do', { size: 17, bold: true }),
    svgText(LEFT, 52, drawn, { size: 12 }),
    drawKeys(LEFT, 74),
    ...panels,
    '</svg>\n',
  ].join('\n');
}

function drawVariant(variant: SpreadVariant, panel: Panel): string {
  const { left, top } = panel.area;
  const curve = (key: keyof FigureRecord, style: CurveStyle): string =>
    drawCurve(pointsOf(variant.response, key), panel, style, `data-spread="${key}"`);
  const title = fitText(onePlainLine(variant.name) || '(no name)', 14, PLOT_WIDTH - 80);
  return [
    svgText(left, top - 10, title, { size: 14, bold: true }),
    drawBand(variant.response, panel),
    drawAxes(panel, { frequencyLabels: true, minusThree: true, axisTitle: 'dB' }),
    curve('least', EXTREME),
    curve('most', EXTREME),
    curve('nominal', NOMINAL),
  ].join('\n');
}

function pointsOf(rows: readonly Row[], key: keyof FigureRecord): { hertz: number; decibels: number }[] {
  return rows.map((row) => ({ hertz: row.hertz, decibels: row[key] ?? 0 }));
}

/** What nine in ten lie between, as a filled strip; held to the panel's range where it leaves it. */
function drawBand(rows: readonly Row[], panel: Panel): string {
  const { low, high } = panel.range;
  const held = (value: number | null): number => panel.y(Math.min(Math.max(value ?? 0, low), high));
  const path = area<Row>()
    .x((row) => panel.x(row.hertz))
    .y0((row) => held(row.low5))
    .y1((row) => held(row.high95))
    .curve(curveMonotoneX)
    .digits(2);
  return `<path data-spread="band" d="${path([...rows]) ?? ''}" fill="${BAND.fill}" stroke="${BAND.stroke}"/>`;
}

function drawKeys(left: number, y: number): string {
  const texts = ['nominal', '5 to 95 % of the circuits', 'least and most'] as const;
  let x = left;
  return texts
    .map((text, k) => {
      const sample =
        k === 1
          ? `<rect x="${px(x)}" y="${px(y - 6)}" width="44" height="12" fill="${BAND.fill}" stroke="${BAND.stroke}"/>`
          : drawLineSample(x, y, k === 0 ? NOMINAL : EXTREME);
      const drawn = sample + svgText(x + 54, y + 4.5, text, { size: 13 });
      x += 54 + textWidth(text, 13) + 28;
      return drawn;
    })
    .join('');
}
