import { formatQuantity } from '../engine/parts/format-quantity.ts';
import { COST_PARTS } from '../results/cost-parts.ts';
import type { CostRow, ResponseRow, VariantResult } from '../results/result.ts';

/** Frequency at which brightness is compared: where speech turns dull first. */
const TREBLE_HERTZ = 5000;
const LEVEL_HERTZ = 400;
/** Differences below this are not worth a word, dB: about what trained ears tell. Common practice, no source. */
const SMALL_DECIBELS = 0.5;

/** The row nearest to a frequency. */
export function rowAt(variant: VariantResult, hertz: number): ResponseRow | null {
  return variant.response.find((row) => row.hertz === hertz) ?? null;
}

/** `2.3 dB`, without its sign. */
const decibels = (value: number): string => `${Math.abs(value).toFixed(1)} dB`;

/** Two or three sentences on what the variants do, made from their figures. */
export function inWords(variants: readonly VariantResult[]): string[] {
  const first = variants[0];
  if (!first) return [];
  if (variants.length === 1) return alone(first);
  const treble = (variant: VariantResult): number => rowAt(variant, TREBLE_HERTZ)?.decibels ?? 0;
  const sorted = [...variants].sort((a, b) => treble(a) - treble(b));
  const dull = sorted[0] as VariantResult;
  const bright = sorted[sorted.length - 1] as VariantResult;
  const apart = treble(bright) - treble(dull);
  if (apart < SMALL_DECIBELS) {
    return [
      `In treble the variants are alike: at 5 kHz no two of them are more than ${decibels(apart)} apart.`,
      ...levels(variants),
    ];
  }
  const louder = level(bright) - level(dull);
  const level2 =
    Math.abs(louder) < SMALL_DECIBELS
      ? 'and as loud'
      : `and ${decibels(louder)} ${louder > 0 ? 'louder' : 'softer'} at 400 Hz`;
  const { name, difference } = mainPart(dull, bright);
  const because =
    difference < SMALL_DECIBELS
      ? 'No single part accounts for it.'
      : `The ${name} alone accounts for ${decibels(difference)} of the difference.`;
  const others = sorted
    .slice(1, -1)
    .map(
      (variant) =>
        `${quoted(variant)} lies between, ${decibels(treble(variant) - treble(dull))} brighter than ${quoted(dull)}.`,
    );
  return [
    `${quoted(bright)} is ${decibels(apart)} brighter at 5 kHz than ${quoted(dull)} ${level2}.`,
    because,
    ...others.slice(0, 1),
  ];
}

function alone(variant: VariantResult): string[] {
  const row = rowAt(variant, TREBLE_HERTZ);
  const corner = variant.highCornerHertz;
  const falls =
    corner === null
      ? 'does not fall by 3 dB below 16 kHz'
      : `is 3 dB down at ${formatQuantity(corner, 'frequency', 3)} and ${decibels(row?.decibels ?? 0)} ${(row?.decibels ?? 0) > 0 ? 'up' : 'down'} at 5 kHz`;
  const part = row ? costliest(row.cost) : null;
  return [
    `${quoted(variant)} ${falls}.`,
    part && part.decibels >= SMALL_DECIBELS
      ? `The ${part.name} costs most there: ${decibels(part.decibels)}.`
      : 'No single part costs as much as half a decibel there.',
  ];
}

function levels(variants: readonly VariantResult[]): string[] {
  const sorted = [...variants].sort((a, b) => level(a) - level(b));
  const [soft, loud] = [sorted[0] as VariantResult, sorted[sorted.length - 1] as VariantResult];
  const apart = level(loud) - level(soft);
  return apart < SMALL_DECIBELS
    ? ['They are as loud as each other, too.']
    : [`${quoted(loud)} is the loudest, ${decibels(apart)} over ${quoted(soft)} at 400 Hz.`];
}

/** Audio at 400 Hz and 30 % modulation, dB re 1 V. */
function level(variant: VariantResult): number {
  return 20 * Math.log10(Math.max(rowAt(variant, LEVEL_HERTZ)?.voltsRmsAt30Percent ?? 0, 1e-12));
}

/** The part whose cost differs most between two variants. */
function mainPart(dull: VariantResult, bright: VariantResult): { readonly name: string; readonly difference: number } {
  const [a, b] = [rowAt(dull, TREBLE_HERTZ), rowAt(bright, TREBLE_HERTZ)];
  return COST_PARTS.map(({ key, name }) => ({ name, difference: a && b ? a.cost[key] - b.cost[key] : 0 })).reduce(
    (most, part) => (part.difference > most.difference ? part : most),
  );
}

/** The part that costs most in a row; null where none costs anything. */
export function costliest(
  cost: CostRow,
): { readonly key: keyof CostRow; readonly name: string; readonly decibels: number } | null {
  const most = COST_PARTS.map(({ key, name }) => ({ key, name, decibels: cost[key] })).reduce((a, b) =>
    b.decibels > a.decibels ? b : a,
  );
  return most.decibels > 0 ? most : null;
}

function quoted(variant: VariantResult): string {
  return `‘${variant.name}’`;
}

/** Every caution once, with the variants it concerns where it does not concern all. */
export function cautionsOf(variants: readonly VariantResult[]): string[] {
  const concerned = new Map<string, string[]>();
  for (const variant of variants) {
    for (const caution of variant.cautions) concerned.set(caution, [...(concerned.get(caution) ?? []), variant.name]);
  }
  return [...concerned].map(([caution, names]) =>
    names.length === variants.length ? caution : `${names.map((name) => `‘${name}’`).join(', ')}: ${caution}`,
  );
}
