import { InputError } from '../../engine/errors.ts';
import { formatQuantity } from '../../engine/parts/format-quantity.ts';
import { parseQuantity } from '../../engine/parts/quantities.ts';
import { findTube, TUBE_TYPES } from '../../engine/tubes/catalogue.ts';
import { SOCKET_STRAYS, tubeFromCatalogue } from '../../engine/tubes/socketed-tube.ts';
import { EXIT, type Io } from '../io.ts';
import { flag, type RawOptions, text } from '../options.ts';
import { plainTable } from '../plain-table.ts';
import { hasReadings, PART_KINDS, type PartKind, partsData, printParts, printReadTransformer } from './stock-loads.ts';

const KINDS = ['tubes', ...PART_KINDS] as const;

/** The catalogue, whole or one part of it. */
export async function stock(kind: string | null, name: string | null, options: RawOptions, io: Io): Promise<number> {
  const json = flag(options, 'json');
  const supplyVolts = parseQuantity(text(options, 'supply') ?? '90V', 'voltage', '--supply', {
    atLeast: 0,
    atMost: 1000,
  });
  if (kind !== null && !KINDS.some((known) => known === kind)) {
    // `stock 6SL7-GT` means the tube: nobody should have to say what kind of thing it is
    if (name === null) return stock('tubes', kind, options, io);
    throw new InputError({ code: 'unknown-kind', where: 'stock', got: kind, expected: `one of ${KINDS.join(', ')}` });
  }
  if (hasReadings(options)) {
    printReadTransformer(options, json, io);
    return EXIT.done;
  }
  const partKind: PartKind | undefined = PART_KINDS.find((known) => known === kind);
  if (partKind) {
    const data = partsData(partKind, name);
    if (json) io.out(`${JSON.stringify({ [partKind]: data }, null, 2)}\n`);
    else printParts(partKind, name, io);
    return EXIT.done;
  }
  if (name !== null) return stockTube(name, supplyVolts, json, io);
  if (json) {
    const others = kind === null ? Object.fromEntries(PART_KINDS.map((one) => [one, partsData(one, null)])) : {};
    io.out(`${JSON.stringify({ tubes: TUBE_TYPES, ...others }, null, 2)}\n`);
    return EXIT.done;
  }
  const rows = TUBE_TYPES.map((type) => [
    type.name,
    type.cathode,
    `${type.heater.volts} V ${type.heater.amps} A`,
    String(type.rows[0]?.mu ?? ''),
    `${type.ratings.maxPlateVolts} V`,
    type.ratings.maxPlateWatts === null ? '-' : `${type.ratings.maxPlateWatts} W`,
    String(type.rows.length),
    type.otherNames.join(', '),
  ]);
  io.out(`${plainTable(['tube', 'cathode', 'heater', 'mu', 'max plate', 'max watts', 'rows', 'also'], rows)}\n`);
  if (kind === null) {
    for (const one of PART_KINDS) {
      io.out('\n');
      printParts(one, null, io);
    }
  }
  io.err('One tube with its published rows, fit errors and sources: presolder stock tubes NAME\n');
  return EXIT.done;
}

function stockTube(name: string, supplyVolts: number, json: boolean, io: Io): number {
  const type = findTube(name, 'stock tubes');
  const socketed = tubeFromCatalogue(name, { supplyVolts, strays: SOCKET_STRAYS, where: 'stock tubes' });
  if (json) {
    const { tube, row, errors, gridNote } = socketed;
    io.out(
      `${JSON.stringify({ tube, publishedRows: type.rows, lawTakenFrom: row, errors, gridCurrent: gridNote, ratings: type.ratings, heater: type.heater, cathode: type.cathode, capacitances: type.capacitances }, null, 2)}\n`,
    );
    return EXIT.done;
  }
  const { law } = socketed.tube;
  io.out(`${type.name}${type.otherNames.length > 0 ? ` (also ${type.otherNames.join(', ')})` : ''}\n`);
  io.out(`${type.cathode}, ${type.heater.volts} V ${type.heater.amps} A\n`);
  io.out(
    `plate at most ${type.ratings.maxPlateVolts} V${type.ratings.maxPlateWatts === null ? '' : `, ${type.ratings.maxPlateWatts} W`}: ${type.ratings.source}, ${type.ratings.recall}\n`,
  );
  const c = type.capacitances;
  const pf = (farads: number): string => formatQuantity(farads, 'capacitance');
  io.out(
    `grid-plate ${pf(c.gridPlateFarads)}, grid-cathode ${pf(c.gridCathodeFarads)}, plate-cathode ${pf(c.plateCathodeFarads)}: ${c.source}, ${c.recall}\n\n`,
  );
  const rows = socketed.errors.map((error) => {
    const { row } = error;
    const published = type.rows.find(
      (known) => known.plateVolts === row.plateVolts && known.gridVolts === row.gridVolts,
    );
    return [
      `${row.plateVolts} V`,
      `${row.gridVolts} V`,
      formatQuantity(row.plateAmps, 'current'),
      String(row.mu),
      `${(row.siemens * 1e6).toFixed(0)} µS`,
      `${error.plateCurrentPercent >= 0 ? '+' : ''}${error.plateCurrentPercent.toFixed(1)} %`,
      `${error.transconductancePercent >= 0 ? '+' : ''}${error.transconductancePercent.toFixed(1)} %`,
      row === socketed.row ? 'law taken here' : '',
      published ? published.recall : '',
    ];
  });
  io.out(`${plainTable(['plate', 'grid', 'current', 'mu', 'slope', 'current off', 'slope off', '', 'known'], rows)}\n`);
  io.out(
    `\nLaw: G ${law.G.toExponential(4)} A/V^${law.gamma}, knee ${law.C}/V, mu ${law.mu}, contact potential ${law.phi.toFixed(3)} V; grid current ${socketed.gridNote}\n`,
  );
  const sources = [...new Set(type.rows.map((row) => `${row.source}, ${row.recall}`))];
  io.out(`Rows: ${sources.join('; ')}\n`);
  for (const caution of socketed.cautions) io.out(`Caution: ${caution.got}; expected ${caution.expected}\n`);
  return EXIT.done;
}
