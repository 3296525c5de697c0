import { type Fit, fitResponse } from '../engine/choosing/fit-response.ts';
import { InputError } from '../engine/errors.ts';
import { formatQuantity } from '../engine/parts/format-quantity.ts';
import type { AdjustableVariant } from '../list/adjustable.ts';
import type { ChosenPart } from '../list/part-names.ts';
import { measuredCurve, thinned } from '../results/measured-curve.ts';
import { onePlainLine } from '../results/plain-line.ts';
import { startOf } from './choice-answer.ts';
import { type PartScale, partScales } from './choice-input.ts';
import { neighbours } from './choice-rows.ts';
import { partValue } from './choice-text.ts';
import { driven } from './driven.ts';
import { readTable } from './hearing-input.ts';
import { EXIT, type Io } from './io.ts';
import { flag, type RawOptions } from './options.ts';
import { plainTable } from './plain-table.ts';
import type { Progress } from './progress.ts';

/** Correlation from which two values are said to trade for one another. */
const TRADE = 0.9;

/** Finds the values that explain a measured response, for every variant; prints them. */
export async function fitted(
  variants: readonly AdjustableVariant[],
  parts: readonly ChosenPart[],
  file: string,
  options: RawOptions,
  progress: Progress,
  io: Io,
): Promise<number> {
  const curve = measuredCurve(await readTable(file, '--fit'), file);
  const measurement = thinned(curve);
  const least = parts.length + 2;
  if (measurement.hertz.length < least) {
    throw new InputError({
      code: 'few-readings',
      where: file,
      got: `${measurement.hertz.length} readings`,
      expected: `${least} or more, spread over the frequencies, for ${parts.length} unknown values`,
    });
  }
  const fits: { variant: string; fit: Fit; scales: PartScale[] }[] = [];
  for (const [k, variant] of variants.entries()) {
    const scales = partScales(parts, variant, options);
    const question = {
      measurement,
      parts: scales.map((scale) => ({ low: scale.low, high: scale.high, standing: startOf(scale) })),
      circuitAt: (values: readonly number[]) =>
        variant.circuitWith(new Map(scales.map(({ part }, n) => [part.key, values[n] as number]))).circuit,
    };
    const search = fitResponse(question);
    const fit = await driven(
      search,
      progress,
      `fitting ${variant.name}`,
      k / variants.length,
      (k + 1) / variants.length,
    );
    if (fit === null) {
      throw new InputError({
        code: 'no-circuit',
        where: JSON.stringify(variant.name),
        got: 'no values of these parts at which the circuit comes to rest',
        expected: 'a list whose other values let it',
      });
    }
    fits.push({ variant: variant.name, fit, scales });
  }
  progress.clear();
  await progress.pause();
  const readings = curve.hertz.length;
  if (flag(options, 'json')) {
    const record = { format: 'presolder-fit/1', file, readings, variants: fits.map(fitRecord) };
    io.out(`${JSON.stringify(record, null, 2)}\n`);
  } else
    io.out(`${fits.map(({ variant, fit, scales }) => fitText(variant, fit, scales, file, readings)).join('\n\n')}\n`);
  return EXIT.done;
}

function fitRecord({ variant, fit, scales }: { variant: string; fit: Fit; scales: PartScale[] }): unknown {
  const ofParts = (values: Fit['parts']): unknown[] =>
    values.map(({ value, low, high, atEnd }, k) => ({
      key: scales[k]?.part.key,
      value,
      // JSON has no infinity: null where the measurement does not tell
      low95: low > 0 ? low : null,
      high95: Number.isFinite(high) ? high : null,
      atEndOfRange: atEnd,
      ...neighbours(value, scales[k]?.members ?? []),
    }));
  return {
    variant,
    parts: ofParts(fit.parts),
    others: fit.others.map(ofParts),
    residualRmsDecibels: fit.rmsDecibels,
    degreesOfFreedom: fit.degrees,
    correlations: fit.correlations,
  };
}

function fitText(variant: string, fit: Fit, scales: readonly PartScale[], file: string, readings: number): string {
  const names = scales.map(({ part }) => part.name);
  const rows = fit.parts.map((part, k) => {
    const scale = scales[k] as PartScale;
    const { below, above } = neighbours(part.value, scale.members);
    const nearer = below !== null && (above === null || part.value / below <= above / part.value) ? below : above;
    const mark = (value: number | null): string =>
      value === null ? '-' : `${partValue(scale, value, false)}${value === nearer ? ' (nearest)' : ''}`;
    return [
      scale.part.name,
      scale.standing === null ? '-' : partValue(scale, scale.standing, false),
      partValue(scale, part.value, true),
      intervalText(part, scale),
      mark(below),
      mark(above),
    ];
  });
  const among = scales.find((scale) => scale.among)?.among ?? '';
  const lines = [
    `${onePlainLine(variant)}: ${names.join(', ')} from ${onePlainLine(file)}, ${readings} readings`,
    '',
    plainTable(['part', 'listed', 'fitted', '95 % interval', `${among} below`.trim(), `${among} above`.trim()], rows),
    '',
    `Left over: ${fit.rmsDecibels.toFixed(2)} dB rms. The level is left free: only the shape of the response counts.`,
  ];
  for (const other of fit.others) {
    const values = other.map((part, k) => `${names[k]} ${partValue(scales[k], part.value, true)}`);
    lines.push(
      `The measurement cannot tell these values from ${values.join(' with ')}; those nearer the list are given.`,
    );
  }
  for (const [k, part] of fit.parts.entries()) {
    if (part.atEnd) lines.push(`${names[k]} stands at the end of its range: something else shapes this response.`);
    fit.correlations?.[k]?.forEach((value, other) => {
      if (other > k && Math.abs(value) > TRADE) {
        lines.push(`${names[k]} and ${names[other]} trade for one another: measure one of them, and fit the other.`);
      }
    });
  }
  return lines.join('\n');
}

function intervalText(part: Fit['parts'][number], scale: PartScale): string {
  if (part.low === 0 && !Number.isFinite(part.high)) return 'not told by these readings';
  const show = (value: number): string => formatQuantity(value, scale.part.kind, 3);
  if (part.low === 0) return `up to ${show(part.high)}`;
  return Number.isFinite(part.high) ? `${show(part.low)} to ${show(part.high)}` : `${show(part.low)} and more`;
}
