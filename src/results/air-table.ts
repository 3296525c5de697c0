import { formatQuantity } from '../engine/parts/format-quantity.ts';
import type { OnTheAirRecord } from './air-record.ts';
import type { VariantResult } from './result.ts';

/** How the rows come about, for a reader. */
export const AIR_NOTE =
  'Wanted: what of the output the wanted station alone accounts for (by projection). Unwanted: all the rest.';

const volts = (value: number): string => formatQuantity(value, 'voltage', 3);
const signed = (value: number | null): string =>
  value === null ? '' : `${value > 0 ? '+' : ''}${value.toFixed(1).replace('-0.0', '0.0')} dB`;

type Air = OnTheAirRecord;

const ROWS: readonly (readonly [string, (air: Air) => string])[] = [
  [
    'second station',
    ({ secondStation: other }) => (other ? `${offset(other.offsetHertz)}, ${volts(other.levelVoltsRms)}` : ''),
  ],
  ['noise', ({ noise }) => (noise ? `${volts(noise.levelVoltsRms)} in ${hertz(noise.bandHertz)}` : '')],
  ['static', ({ statics }) => (statics ? `${volts(statics.levelVoltsRms)}, ${statics.crashesPerSecond} a second` : '')],
  [
    'beat oscillator',
    ({ beatOscillator: beat }) => (beat ? `${offset(beat.pitchHertz)}, ${volts(beat.levelVoltsRms)}` : ''),
  ],
  ['wanted audio, alone', (air) => volts(air.wantedAloneVoltsRms)],
  ['wanted audio, with the others', (air) => (disturbed(air) ? volts(air.wantedVoltsRms) : '')],
  ['unwanted audio', (air) => (disturbed(air) ? volts(air.unwantedVoltsRms) : '')],
  ['wanted over unwanted', (air) => signed(air.wantedOverUnwantedDecibels)],
  ['whistle', ({ whistle }) => (whistle ? `${hertz(whistle.hertz)}, ${volts(whistle.voltsRms)}` : '')],
  ['whistle re wanted audio', ({ whistle }) => signed(whistle?.decibels ?? null)],
  ['tone, key down', ({ tone }) => (tone ? `${hertz(tone.hertz)}, ${volts(tone.voltsRms)}` : '')],
  ['keying, rise 10 to 90 %', ({ tone }) => (tone?.riseSeconds ? formatQuantity(tone.riseSeconds, 'time', 2) : '')],
  ['band with 99 % of the tone', ({ tone }) => (tone ? hertz(tone.bandwidthHertz) : '')],
];

/** Rows of what is on the air and how it is heard, a cell a variant; rows that no variant has are left out. */
export function airRows(variants: readonly VariantResult[]): readonly (readonly string[])[] {
  return ROWS.map(([name, cell]) => [name, ...variants.map(({ onTheAir }) => (onTheAir ? cell(onTheAir) : ''))]).filter(
    ([, ...cells]) => cells.some((text) => text !== ''),
  );
}

function disturbed({ secondStation, noise, statics }: Air): boolean {
  return secondStation !== null || noise !== null || statics !== null;
}

function hertz(value: number): string {
  return formatQuantity(value, 'frequency', 3);
}

function offset(value: number): string {
  return `${value > 0 ? '+' : ''}${hertz(value)}`;
}
