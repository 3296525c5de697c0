import { CHOKES, LOW_IMPEDANCE_EARPIECE, PHONES, TRANSFORMERS } from '../../engine/circuits/catalogue-loads.ts';
import { transformerFromReadings } from '../../engine/circuits/transformer-readings.ts';
import { InputError } from '../../engine/errors.ts';
import { HEARING_CURVES } from '../../engine/hearing/hearing-curves.ts';
import { formatQuantity, type QuantityKind } from '../../engine/parts/format-quantity.ts';
import { parseQuantity } from '../../engine/parts/quantities.ts';
import { OUTPUT_PARTS } from '../../list/output-parts.ts';
import { loadText } from '../../results/load-text.ts';
import type { Io } from '../io.ts';
import { type RawOptions, text } from '../options.ts';
import { plainTable } from '../plain-table.ts';

/** Kinds of stock besides tubes. */
export const PART_KINDS = ['transformers', 'chokes', 'phones', 'outputs', 'hearing'] as const;
export type PartKind = (typeof PART_KINDS)[number];

interface Listed {
  readonly name: string;
  readonly source: string;
}

function partsOf(kind: PartKind): readonly Listed[] {
  switch (kind) {
    case 'transformers':
      return TRANSFORMERS;
    case 'chokes':
      return CHOKES;
    case 'phones':
      return [...PHONES, LOW_IMPEDANCE_EARPIECE];
    case 'outputs':
      return OUTPUT_PARTS;
    case 'hearing':
      return HEARING_CURVES;
  }
}

/** One kind of parts, or one of them, as data. */
export function partsData(kind: PartKind, name: string | null): readonly Listed[] {
  const parts = partsOf(kind);
  const found = name === null ? parts : parts.filter((part) => part.name.toLowerCase() === name.toLowerCase());
  if (found.length > 0) return found;
  throw new InputError({
    code: 'unknown-part',
    where: `stock ${kind}`,
    got: name ?? '',
    expected: `one of ${parts.map((part) => part.name).join(', ')}`,
  });
}

/** Prints a kind of parts as a table. */
export function printParts(kind: PartKind, name: string | null, io: Io): void {
  const wanted = new Set(partsData(kind, name).map((part) => part.name));
  const shown = <T extends Listed>(parts: readonly T[]): readonly T[] => parts.filter((part) => wanted.has(part.name));
  const or = (value: number | null, unit: QuantityKind): string =>
    value === null ? 'none' : formatQuantity(value, unit, 3);
  if (kind === 'outputs') {
    const rows = shown(OUTPUT_PARTS).map((part) => [
      part.name,
      or(part.loadOhms, 'resistance'),
      or(part.loadFarads, 'capacitance'),
      part.source,
    ]);
    io.out(`${plainTable(['what the stage feeds', 'resistance', 'capacitance', 'source'], rows)}\n`);
  } else if (kind === 'transformers') {
    const rows = shown(TRANSFORMERS).map(({ name: part, load, source }) => [
      part,
      `${or(load.falling?.henriesWithoutCurrent ?? load.primaryHenries, 'inductance')}`,
      load.falling ? `${or(load.falling.henriesAtAmps, 'inductance')} at ${or(load.falling.amps, 'current')}` : '',
      or(load.leakageHenries, 'inductance'),
      or(load.primaryDcOhms, 'resistance'),
      or(load.secondaryDcOhms, 'resistance'),
      or(load.primaryFarads, 'capacitance'),
      or(load.secondaryFarads, 'capacitance'),
      or(load.coreLossOhms, 'resistance'),
      source,
    ]);
    const heads = [
      'transformer',
      'primary',
      'with current',
      'leakage',
      'DC pri',
      'DC sec',
      'C pri',
      'C sec',
      'core loss',
      'source',
    ];
    io.out(`${plainTable(heads, rows)}\n`);
  } else if (kind === 'chokes') {
    const rows = shown(CHOKES).map(({ name: part, load, source }) => [
      part,
      or(load.henries, 'inductance'),
      or(load.dcOhms, 'resistance'),
      or(load.coreLossOhms, 'resistance'),
      or(load.selfFarads, 'capacitance'),
      source,
    ]);
    io.out(`${plainTable(['choke', 'inductance', 'DC', 'core loss', 'self C', 'source'], rows)}\n`);
  } else if (kind === 'phones') {
    const rows = shown([...PHONES, LOW_IMPEDANCE_EARPIECE]).map(({ name: part, load, source }) => [
      part,
      loadText(load),
      or(load.resonanceOhms, 'resistance'),
      source,
    ]);
    io.out(`${plainTable(['phones', 'values', 'resonance adds', 'source'], rows)}\n`);
  } else {
    const rows = shown(HEARING_CURVES).map((curve) => [
      curve.name,
      curve.sections
        .map(
          (section) =>
            `${section.kind} ${formatQuantity(section.hertz, 'frequency')}${section.kind === 'peak' ? ` ${section.decibels} dB` : ''}`,
        )
        .join(', ') || 'no change',
      curve.source,
    ]);
    io.out(`${plainTable(['heard through', 'curve', 'source'], rows)}\n`);
  }
}

/** Whether bench readings of a transformer were given. */
export function hasReadings(options: RawOptions): boolean {
  return ['lowCorner', 'resonance', 'height'].some((name) => text(options, name) !== null);
}

/** Works a transformer out from bench readings and prints its parts list entry. */
export function printReadTransformer(options: RawOptions, json: boolean, io: Io): void {
  const need = (name: string, flag: string, kind: QuantityKind): number => {
    const written = text(options, name);
    if (written !== null) return parseQuantity(written, kind, flag);
    throw new InputError({
      code: 'missing-reading',
      where: flag,
      got: 'nothing',
      expected:
        'a reading; all of --ratio, --source, --low-corner, --resonance, --height, --primary-dc, --secondary-dc are needed',
    });
  };
  const decibels = (name: string, flag: string): number =>
    parseQuantity((text(options, name) ?? '').replace(/\s*dB$/i, '') || 'nothing', 'number', flag);
  const readings = {
    ratio: need('ratio', '--ratio', 'ratio'),
    sourceOhms: need('source', '--source', 'resistance'),
    loadOhms: text(options, 'load') === null ? null : need('load', '--load', 'resistance'),
    meterFarads: text(options, 'meter') === null ? 0 : need('meter', '--meter', 'capacitance'),
    lowCornerHertz: need('lowCorner', '--low-corner', 'frequency'),
    peakHertz: need('resonance', '--resonance', 'frequency'),
    peakDecibels: decibels('height', '--height'),
    midLossDecibels: text(options, 'midLoss') === null ? null : decibels('midLoss', '--mid-loss'),
    primaryDcOhms: need('primaryDc', '--primary-dc', 'resistance'),
    secondaryDcOhms: need('secondaryDc', '--secondary-dc', 'resistance'),
  };
  const found = transformerFromReadings(readings);
  if (json) {
    io.out(`${JSON.stringify({ readings, transformer: found }, null, 2)}\n`);
    return;
  }
  const show = (value: number, kind: QuantityKind): string => formatQuantity(value, kind, 3);
  const coreOhms = found.coreLossOhms === null ? 'none' : show(found.coreLossOhms, 'resistance');
  const core =
    readings.midLossDecibels === null ? `${coreOhms}   # not read but assumed: --mid-loss tells it` : coreOhms;
  io.out(`plate:
  load:
    kind: transformer
    ratio: ${formatQuantity(readings.ratio, 'ratio')}
    primary inductance: ${show(found.primaryHenries, 'inductance')}   # as read, without direct current
    primary dc resistance: ${show(readings.primaryDcOhms, 'resistance')}
    leakage: ${show(found.leakageHenries, 'inductance')}
    core loss: ${core}
    primary capacitance: ${show(found.primaryFarads, 'capacitance')}   # typical: it hardly shows
    secondary dc resistance: ${show(readings.secondaryDcOhms, 'resistance')}
    secondary capacitance: ${show(found.secondaryFarads, 'capacitance')}
`);
}
