import { type Fault, InputError } from '../errors.ts';
import { formatQuantity } from '../parts/format-quantity.ts';
import { findTube } from './catalogue.ts';
import {
  type CathodeKind,
  contactPotentialCaution,
  lawFromRow,
  nearestRow,
  type RowError,
  type RowFitOptions,
  rowErrors,
  type TriodeRow,
} from './fitting.ts';
import { type GridLaw, gridLawFromZeroCurrent } from './grid-law.ts';
import type { Tube } from './tube.ts';
import { assumedGridCurrent, type PublishedRow, type TubeType } from './tube-type.ts';

/** Capacitances that socket and wiring add, F, each 0 or more. */
export interface Strays {
  readonly gridPlateFarads: number;
  readonly gridCathodeFarads: number;
  readonly plateCathodeFarads: number;
}

/**
 * Strays of a socket with short leads: 1.5 pF from grid to plate and from grid to cathode (the allowance of a worked
 * example at https://www.htg2.net/index.php/topic,93294.msg604089060.html, seen), 3 pF from plate to cathode
 * (common practice, no source).
 */
export const SOCKET_STRAYS: Strays = {
  gridPlateFarads: 1.5e-12,
  gridCathodeFarads: 1.5e-12,
  plateCathodeFarads: 3e-12,
};

export interface SocketOptions extends RowFitOptions {
  /** V; picks the row whose plate voltage is nearest, unless a row is named. */
  readonly supplyVolts: number;
  /** Plate voltage of the row to use, V, when it is not the nearest one. */
  readonly rowPlateVolts?: number;
  readonly strays: Strays;
  /** A measured grid law in place of the assumed one. */
  readonly grid?: GridLaw;
}

/** A tube ready for a circuit, with where its law came from. */
export interface SocketedTube<Row extends TriodeRow = TriodeRow> {
  readonly tube: Tube;
  /** The row the law meets exactly. */
  readonly row: Row;
  /** The law's error at every row, the used one included. */
  readonly errors: readonly RowError<Row>[];
  /** Where the grid current came from. */
  readonly gridNote: string;
  readonly cautions: readonly Fault[];
}

/**
 * A tube of the catalogue as it sits in its socket: law from the row nearest the supply (or the named one), strays added.
 *
 * @throws InputError `unknown-tube`, `unknown-row`, `not-a-supply`, `stray-negative`
 */
export function tubeFromCatalogue(
  name: string,
  options: SocketOptions,
): SocketedTube<PublishedRow> & { readonly type: TubeType } {
  const type = findTube(name, options.where ?? 'detector.tube');
  const socketed = socket(type.name, type.rows, type.cathode, type.heater.volts, type.capacitances, options);
  return { ...socketed, type };
}

/**
 * The common last step of a catalogue tube and a builder's own: choose the row, fit the law, add the strays.
 *
 * @param heaterVolts   V, above 0; judges the row's contact potential
 * @param capacitances  of the tube alone, F
 */
export function socket<Row extends TriodeRow>(
  type: string,
  rows: readonly Row[],
  cathode: CathodeKind,
  heaterVolts: number,
  capacitances: Strays,
  options: SocketOptions,
): SocketedTube<Row> {
  const where = options.where ?? 'detector.tube';
  refuseSurroundings(options, where);
  const row = chooseRow(rows, options, where);
  const assumed = assumedGridCurrent(cathode);
  const grid = options.grid ?? gridLawFromZeroCurrent(assumed.ampsAtZeroVolts, assumed.thermalVolts);
  const law = lawFromRow(row, grid, { ...options, where });
  const caution = contactPotentialCaution(row, cathode, heaterVolts, where);
  return {
    tube: {
      type,
      law,
      gridPlateFarads: capacitances.gridPlateFarads + options.strays.gridPlateFarads,
      gridCathodeFarads: capacitances.gridCathodeFarads + options.strays.gridCathodeFarads,
      plateCathodeFarads: capacitances.plateCathodeFarads + options.strays.plateCathodeFarads,
    },
    row,
    errors: rowErrors(law, rows),
    gridNote: options.grid ? 'as given' : assumed.note,
    cautions: caution === null ? [] : [caution],
  };
}

function refuseSurroundings(options: SocketOptions, where: string): void {
  const faults: Fault[] = [];
  if (!(options.supplyVolts >= 0 && Number.isFinite(options.supplyVolts))) {
    faults.push({
      code: 'not-a-supply',
      where,
      got: String(options.supplyVolts),
      expected: 'supply volts of 0 or more',
    });
  }
  for (const [key, farads] of Object.entries(options.strays)) {
    if (farads >= 0 && Number.isFinite(farads)) continue;
    faults.push({ code: 'stray-negative', where: `${where} ${key}`, got: String(farads), expected: '0 pF or more' });
  }
  if (faults.length > 0) throw new InputError(faults);
}

function chooseRow<Row extends TriodeRow>(rows: readonly Row[], options: SocketOptions, where: string): Row {
  if (options.rowPlateVolts === undefined) return nearestRow(rows, options.supplyVolts);
  const wanted = options.rowPlateVolts;
  const named = rows.filter((row) => Math.abs(row.plateVolts - wanted) < 0.5);
  if (named.length > 0) return nearestRow(named, options.supplyVolts);
  throw new InputError({
    code: 'unknown-row',
    where,
    got: formatQuantity(wanted, 'voltage'),
    expected: `the plate voltage of a published row: ${rows.map((row) => formatQuantity(row.plateVolts, 'voltage')).join(', ')}`,
  });
}
