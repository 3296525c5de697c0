import { scaleLinear, scaleLog } from 'd3-scale';
import { line } from 'd3-shape';
import { onePlainLine } from './plain-line.ts';
import { variantStyle } from './plot-curves.ts';
import { drawLegend } from './plot-legend.ts';
import { drawTag } from './plot-tags.ts';
import type { Result, SensitivityRow, VariantResult } from './result.ts';
import { escapeXml, fitText, INK, px, ROOT_FONT, svgText } from './svg-text.ts';

const WIDTH = 960;
const LEFT = 84;
const PLOT_WIDTH = 816;
const AUDIO_HEIGHT = 380;
const DISTORTION_HEIGHT = 190;
const LEVELS = [5e-3, 10e-3, 20e-3, 50e-3, 0.1, 0.2, 0.5, 1, 2, 5] as const;
const LINE = '#ccd2db';
const FRAME = '#7a8595';
/** Least audio that is drawn, V: below it is no sound. */
const LEAST_VOLTS = 1e-7;

/**
 * Audio out against carrier level for every variant, and the second harmonic below it: where one detector is most
 * sensitive and another more linear. One SVG picture without scripts or outside references.
 */
export function sensitivitySvg(result: Result): string {
  const { variants } = result;
  const tagged = variants.length > 1;
  const legend = drawLegend(
    variants.map((variant, i) => ({
      label: fitText(onePlainLine(variant.name), 14, 300),
      style: variantStyle(i),
      tag: tagged ? i + 1 : null,
    })),
    LEFT,
    48,
    PLOT_WIDTH,
  );
  const audioTop = 48 + legend.height + 36;
  const distortionTop = audioTop + AUDIO_HEIGHT + 74;
  const height = distortionTop + DISTORTION_HEIGHT + 52;
  const volts = variants.flatMap((variant) => variant.sensitivity.map((row) => row.audioVoltsRmsAt30Percent));
  const shown = volts.filter((value) => value > LEAST_VOLTS);
  const low = 10 ** Math.floor(Math.log10(Math.min(1e-3, ...shown)));
  const high = 10 ** Math.ceil(Math.log10(Math.max(1e-2, ...shown)));
  const audioY = scaleLog()
    .domain([low, high])
    .range([audioTop + AUDIO_HEIGHT, audioTop]);
  const decades = Array.from({ length: Math.round(Math.log10(high / low)) + 1 }, (_, k) => low * 10 ** k);
  const percents = variants.flatMap((variant) => variant.sensitivity.map((row) => row.secondPercent));
  const most = Math.max(5, Math.ceil(Math.max(0, ...percents) / 5) * 5);
  const distortionY = scaleLinear()
    .domain([0, most])
    .range([distortionTop + DISTORTION_HEIGHT, distortionTop]);
  const steps = Array.from({ length: 6 }, (_, k) => (most * k) / 5);
  const described = `Audio at 400 Hz and 30 % modulation against carrier level of ${variants.map((v) => v.name).join('; ')}.`;
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${WIDTH}" height="${height}" viewBox="0 0 ${WIDTH} ${height}" role="img" ${ROOT_FONT}>`,
    '<title>Audio out and second harmonic against carrier level</title>',
    `<desc>${escapeXml(described)}</desc>`,
    `<rect width="${WIDTH}" height="${height}" fill="#ffffff"/>`,
    svgText(LEFT, 32, 'Audio out against carrier level, 400 Hz at 30 % modulation', { size: 17, bold: true }),
    legend.svg,
    frame(
      audioTop,
      AUDIO_HEIGHT,
      'V rms',
      decades.map((value) => [audioY(value), voltsLabel(value)]),
    ),
    ...variants.map((variant, i) =>
      curve(variant, i, tagged, (row) =>
        row.audioVoltsRmsAt30Percent > LEAST_VOLTS ? audioY(row.audioVoltsRmsAt30Percent) : null,
      ),
    ),
    svgText(LEFT, distortionTop - 30, 'Second harmonic', { size: 15, bold: true }),
    frame(
      distortionTop,
      DISTORTION_HEIGHT,
      '%',
      steps.map((value) => [distortionY(value), value.toFixed(most % 5 === 0 && most >= 5 ? 0 : 1)]),
    ),
    ...variants.map((variant, i) => curve(variant, i, false, (row) => distortionY(Math.min(row.secondPercent, most)))),
    '</svg>\n',
  ].join('\n');
}

function levelX(volts: number): number {
  const first = Math.log(LEVELS[0]);
  const last = Math.log(LEVELS[LEVELS.length - 1] as number);
  return LEFT + (PLOT_WIDTH * (Math.log(volts) - first)) / (last - first);
}

function frame(top: number, height: number, unit: string, lines: readonly (readonly [number, string])[]): string {
  const bottom = top + height;
  const across = lines.map(
    ([y, label]) =>
      `<line x1="${LEFT}" y1="${px(y)}" x2="${LEFT + PLOT_WIDTH}" y2="${px(y)}" stroke="${LINE}"/>` +
      svgText(LEFT - 8, y + 4, label, { size: 12, anchor: 'end' }),
  );
  const up = LEVELS.map(
    (volts) =>
      `<line x1="${px(levelX(volts))}" y1="${top}" x2="${px(levelX(volts))}" y2="${bottom}" stroke="${LINE}"/>` +
      svgText(levelX(volts), bottom + 18, voltsLabel(volts), { size: 12, anchor: 'middle' }),
  );
  return [
    ...across,
    ...up,
    `<rect x="${LEFT}" y="${top}" width="${PLOT_WIDTH}" height="${height}" fill="none" stroke="${FRAME}"/>`,
    svgText(LEFT - 8, top - 10, unit, { size: 12, anchor: 'end' }),
    svgText(LEFT + PLOT_WIDTH, bottom + 36, 'carrier, rms', { size: 12, anchor: 'end', fill: INK }),
  ].join('\n');
}

function curve(
  variant: VariantResult,
  index: number,
  tagged: boolean,
  y: (row: SensitivityRow) => number | null,
): string {
  const points = variant.sensitivity.flatMap((row): [number, number][] => {
    const place = y(row);
    return place === null ? [] : [[levelX(row.levelVoltsRms), place]];
  });
  const style = variantStyle(index);
  const dash = style.dash === '' ? '' : ` stroke-dasharray="${style.dash}"`;
  const path = line<[number, number]>().digits(2)(points) ?? '';
  const at = points[(2 + 2 * index) % Math.max(points.length, 1)];
  const tag = tagged && at ? drawTag(at[0], at[1], index + 1, style) : '';
  return `<path d="${path}" fill="none" stroke="${style.colour}" stroke-width="2"${dash}/>${tag}`;
}

function voltsLabel(volts: number): string {
  if (volts >= 0.9999) return `${+volts.toPrecision(2)} V`;
  if (volts >= 0.9999e-3) return `${+(1e3 * volts).toPrecision(2)} mV`;
  return `${+(1e6 * volts).toPrecision(2)} µV`;
}
