import { InputError } from '../engine/errors.ts';
import { formatQuantity, type QuantityKind } from '../engine/parts/format-quantity.ts';
import { type PreferredSeries, preferredAbove } from '../engine/parts/preferred-values.ts';
import { parseQuantity, rangeText } from '../engine/parts/quantities.ts';
import type { AdjustableVariant } from '../list/adjustable.ts';
import { type ChosenPart, searchRange, standingValue } from '../list/part-names.ts';
import { choice, type RawOptions, text } from './options.ts';

/** Values that can be had of one part, and the range in which it is searched. */
export interface PartScale {
  readonly part: ChosenPart;
  readonly low: number;
  readonly high: number;
  /** Ascending, base SI units. */
  readonly members: readonly number[];
  /** What the members are called: `E12`, `drawer`; null where there are none. */
  readonly among: string | null;
  /** What stands on the list; null where nothing does. */
  readonly standing: number | null;
}

/** Kinds of parts that are sold in preferred values. */
const IN_SERIES: readonly QuantityKind[] = ['resistance', 'capacitance', 'inductance'];
const MOST_IN_DRAWER = 200;

/**
 * The scale of each part from `--series`, `--drawer` and `--between`; with several parts, their drawers and ranges stand
 * in the order of the parts with semicolons between them.
 *
 * @throws InputError `bad-choice`, `series-and-drawer`, `drawers`, `bad-drawer`, `bad-range`, and those of quantities
 */
export function partScales(parts: readonly ChosenPart[], variant: AdjustableVariant, options: RawOptions): PartScale[] {
  const series = text(options, 'series') === null ? null : choice(options, 'series', ['E6', 'E12', 'E24'], 'E12');
  const drawer = text(options, 'drawer');
  if (series !== null && drawer !== null) {
    throw new InputError({
      code: 'series-and-drawer',
      where: '--drawer',
      got: 'a drawer and a series',
      expected: 'one of them: --series E6, E12 or E24, or --drawer with your own values',
    });
  }
  const drawers = apiece(drawer, '--drawer', '47p,100p,150p', parts);
  const ranges = apiece(text(options, 'between'), '--between', '10p,10n', parts);
  return parts.map((part, k) => {
    const standing = standingValue(variant.list, variant.circuitWith(new Map()).circuit, part.key);
    const own = drawers && readDrawer(drawers[k] as string, part);
    const range = ranges ? readRange(ranges[k] as string, part) : searchRange(part, standing);
    const above0 = (own ?? []).filter((value) => value > 0);
    const [low, high] = [Math.min(range.atLeast, ...above0), Math.max(range.atMost, ...above0)];
    if (own) return { part, low, high, members: own, among: 'drawer', standing };
    const sold = series ?? (IN_SERIES.includes(part.kind) ? 'E12' : null);
    return { part, low, high, members: sold ? seriesWithin(low, high, sold) : [], among: sold, standing };
  });
}

/** The members of a series within a range, ascending. */
export function seriesWithin(low: number, high: number, series: PreferredSeries): number[] {
  const members: number[] = [];
  for (
    let value = preferredAbove(low * 0.999, series);
    value <= high * (1 + 1e-9);
    value = preferredAbove(value, series)
  ) {
    if (value >= low) members.push(value);
  }
  return members;
}

/** A flag's text for each part. */
function apiece(
  written: string | null,
  where: string,
  example: string,
  parts: readonly ChosenPart[],
): readonly string[] | null {
  if (written === null) return null;
  const texts = written.split(';').map((one) => one.trim());
  if (texts.length === parts.length && texts.every((one) => one !== '')) return texts;
  throw new InputError({
    code: 'drawers',
    where,
    got: JSON.stringify(written),
    expected:
      parts.length === 1
        ? `values with commas between them, such as ${example}`
        : `values for each of ${parts.map((part) => part.name).join(', ')} in this order, with semicolons between the parts`,
  });
}

function readDrawer(written: string, part: ChosenPart): number[] {
  const texts = written.split(',').map((one) => one.trim());
  if (texts.length > MOST_IN_DRAWER) {
    throw new InputError({
      code: 'bad-drawer',
      where: '--drawer',
      got: `${texts.length} values`,
      expected: `at most ${MOST_IN_DRAWER}`,
    });
  }
  return [...new Set(texts.map((one) => readMember(one, part)))].sort((a, b) => a - b);
}

function readMember(written: string, part: ChosenPart): number {
  if (part.limits.orZero && parsed(written, part) === 0) return 0;
  return parseQuantity(written === '' ? 'nothing' : written, part.kind, `--drawer, ${part.name}`, part.limits);
}

/** A value, or null where it is none: its fault is told by who asks for it within limits. */
function parsed(written: string, part: ChosenPart): number | null {
  try {
    return parseQuantity(written, part.kind, '');
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}

function readRange(written: string, part: ChosenPart): { readonly atLeast: number; readonly atMost: number } {
  const [first, second, ...more] = written.split(',').map((one) => one.trim());
  const wrong = (got: string, expected: string): InputError =>
    new InputError({ code: 'bad-range', where: `--between, ${part.name}`, got, expected });
  if (first === undefined || second === undefined || more.length > 0) {
    throw wrong(JSON.stringify(written), `two values, the lower first, within ${rangeText(part.limits, part.kind)}`);
  }
  const limits = { ...part.limits, above: 0 };
  const [atLeast, atMost] = [first, second].map((one) =>
    parseQuantity(one, part.kind, `--between, ${part.name}`, limits),
  ) as [number, number];
  if (atMost > atLeast * 1.001) return { atLeast, atMost };
  throw wrong(
    `${formatQuantity(atLeast, part.kind)} and ${formatQuantity(atMost, part.kind)}`,
    'the lower value first, and room between them',
  );
}
