import { COST_PARTS } from './cost-parts.ts';
import { thinned } from './measured-curve.ts';
import { onePlainLine } from './plain-line.ts';
import { type Area, decibelRange, drawAxes, makePanel } from './plot-axes.ts';
import { COST_STYLES, type CurvePoint, drawCurve, variantStyle } from './plot-curves.ts';
import { drawLegend } from './plot-legend.ts';
import { drawReadings } from './plot-readings.ts';
import { drawTag, tagPlaces } from './plot-tags.ts';
import type { MeasuredRecord, Result, VariantResult } from './result.ts';
import { escapeXml, fitText, INK, px, ROOT_FONT, svgText } from './svg-text.ts';

const WIDTH = 960;
const LEFT = 64;
const PLOT_WIDTH = 836;
const RESPONSE_HEIGHT = 380;
const COST_HEIGHT = 130;

/** With more variants than this, only the first and the last one's cost is drawn. */
const MOST_COST_PANELS = 4;

/**
 * The response of every variant over 20 Hz to 20 kHz, dB re 400 Hz, and below it on the same frequencies the cost by
 * part, as one SVG picture without scripts or outside references. Curves differ in colour, dashes and the number on
 * them, so the picture can be read in black and white. Levels below −60 dB are left out.
 *
 * @param result  at least one variant, every response ascending in frequency
 */
export function responseSvg(result: Result): string {
  const { variants } = result;
  const readings = result.measured ? readingsOf(result.measured) : [];
  const legendTop = 48;
  const tagged = variants.length > 1;
  const legend = drawLegend(
    [
      ...variants.map((variant, i) => ({
        label: shownName(variant),
        style: variantStyle(i),
        tag: tagged ? i + 1 : null,
      })),
      ...(result.measured ? [{ label: `measured: ${result.measured.file}`, style: null, tag: null }] : []),
    ],
    LEFT,
    legendTop,
    PLOT_WIDTH,
  );
  const responseTop = legendTop + legend.height + 36;
  const response = drawResponse(variants, readings, area(responseTop, RESPONSE_HEIGHT));
  const cost = drawCosts(variants, responseTop + RESPONSE_HEIGHT + 64);
  const height = Math.ceil(cost.bottom);
  const described = `Response in dB re 400 Hz of ${variants.map((variant) => variant.name).join('; ')}.`;
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${WIDTH}" height="${height}" viewBox="0 0 ${WIDTH} ${height}" ` +
      `role="img" ${ROOT_FONT}>`,
    '<title>Audio response and cost by part</title>',
    `<desc>${escapeXml(described)}</desc>`,
    `<rect width="${WIDTH}" height="${height}" fill="#ffffff"/>`,
    svgText(LEFT, 32, 'Audio at the output, relative to 400 Hz', { size: 17, bold: true }),
    legend.svg,
    response,
    cost.svg,
    '</svg>\n',
  ].join('\n');
}

function area(top: number, height: number): Area {
  return { left: LEFT, top, width: PLOT_WIDTH, height };
}

/** Readings as dots, a finely stepped sweep brought together so that they stay dots. */
function readingsOf({ points }: MeasuredRecord): readonly CurvePoint[] {
  const { hertz, decibels } = thinned({
    hertz: points.map((point) => point.hertz),
    decibels: points.map((point) => point.decibels),
  });
  return hertz.map((f, k) => ({ hertz: f, decibels: decibels[k] as number }));
}

function drawResponse(variants: readonly VariantResult[], readings: readonly CurvePoint[], place: Area): string {
  const values = [...variants.flatMap((variant) => variant.response), ...readings].map((point) => point.decibels);
  const panel = makePanel(place, decibelRange(values, { low: -6, high: 3 }, { low: -60, high: 40 }, 9));
  const axes = drawAxes(panel, { frequencyLabels: true, minusThree: true, axisTitle: 'dB' });
  const curves = variants.map((variant, i) =>
    drawCurve(variant.response, panel, variantStyle(i), `data-variant="${i + 1}"`),
  );
  const places = tagPlaces(
    variants.map((variant) => variant.response),
    panel,
  );
  const tags = places.map((place, i) =>
    place === null || variants.length === 1 ? '' : drawTag(place.x, place.y, i + 1, variantStyle(i)),
  );
  const dots = readings.length === 0 ? [] : [drawReadings(readings, panel)];
  return [axes, ...curves, ...dots, ...tags].join('\n');
}

function drawCosts(variants: readonly VariantResult[], top: number): { readonly svg: string; readonly bottom: number } {
  const all = variants.length <= MOST_COST_PANELS;
  const shown = all ? [...variants.keys()] : [0, variants.length - 1];
  const note = `${all ? '' : `Shown for the first and the last of ${variants.length} variants. `}The costs do not add up exactly.`;
  const legend = drawLegend(
    COST_PARTS.map((part, i) => ({ label: part.name, style: COST_STYLES[i]!, tag: null })),
    LEFT,
    top + 32,
    PLOT_WIDTH,
  );
  const values = shown.flatMap((v) =>
    variants[v]!.response.flatMap((row) => COST_PARTS.map(({ key }) => row.cost[key])),
  );
  const range = decibelRange(values, { low: 0, high: 3 }, { low: -20, high: 60 }, 5);
  const first = top + 32 + legend.height + 42;
  const pitch = COST_HEIGHT + 44;
  const panels = shown.map((v, place) => {
    const variant = variants[v]!;
    const panel = makePanel(area(first + place * pitch, COST_HEIGHT), range);
    const last = place === shown.length - 1;
    const titleTop = panel.area.top - 10;
    const tag = variants.length > 1 ? drawTag(LEFT + 8, titleTop - 4.5, v + 1, variantStyle(v)) : '';
    const titleLeft = variants.length > 1 ? LEFT + 22 : LEFT;
    const curves = COST_PARTS.map(({ key, name }, i) =>
      drawCurve(
        variant.response.map((row) => ({ hertz: row.hertz, decibels: row.cost[key] })),
        panel,
        COST_STYLES[i]!,
        `data-cost-of="${v + 1}" data-part="${name}"`,
      ),
    );
    const title = fitText(shownName(variant), 13, PLOT_WIDTH - 80);
    return [
      tag,
      svgText(titleLeft, titleTop, title, { size: 13, bold: true }),
      drawAxes(panel, { frequencyLabels: last, minusThree: false, axisTitle: 'dB' }),
      ...curves,
    ].join('\n');
  });
  const heading = 'Cost by part: decibels that would come back if that part alone were ideal';
  const svg = [
    `<line x1="${LEFT}" y1="${px(top - 22)}" x2="${LEFT + PLOT_WIDTH}" y2="${px(top - 22)}" stroke="#ccd2db"/>`,
    svgText(LEFT, top + 4, heading, { size: 15, bold: true }),
    svgText(LEFT, top + 23, note, { size: 12, fill: INK }),
    legend.svg,
    ...panels,
  ];
  return { svg: svg.join('\n'), bottom: first + (shown.length - 1) * pitch + COST_HEIGHT + 36 };
}

function shownName(variant: VariantResult): string {
  return onePlainLine(variant.name) || '(no name)';
}
