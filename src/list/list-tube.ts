import type { Caution, Ratings } from '../engine/circuits/cautions.ts';
import { InputError } from '../engine/errors.ts';
import { findTube } from '../engine/tubes/catalogue.ts';
import type { CathodeKind } from '../engine/tubes/fitting.ts';
import { type GridLaw, gridLawFromReadings, gridLawFromZeroCurrent } from '../engine/tubes/grid-law.ts';
import { ownTube } from '../engine/tubes/own-tube.ts';
import { type SocketOptions, type Strays, socket } from '../engine/tubes/socketed-tube.ts';
import type { Tube } from '../engine/tubes/tube.ts';
import { assumedGridCurrent, type TubeType } from '../engine/tubes/tube-type.ts';
import type { CircuitList } from './schema.ts';

/** The tube of a list with what else of it matters to the circuit. */
export interface ListTube {
  readonly tube: Tube;
  readonly cathode: CathodeKind;
  readonly filamentVolts: number;
  readonly ratings: Ratings | null;
  readonly cautions: readonly Caution[];
}

/**
 * Supplies this far from the tube's published rows are called outside them: the law is taken from one row, and at half
 * or twice its plate volts the rows of the catalogue differ from it by 20 to 35 %.
 */
const OUTSIDE_ROWS = 2;

/** The tube of the list: of the catalogue, changed where the list says so, or the builder's own. Throws InputError. */
export function socketedTube(list: CircuitList): ListTube {
  const own = list.tube;
  const type = own.rows ? null : findTube(list.detector.tube, 'detector.tube');
  const cathode = own['cathode kind'] ?? type?.cathode ?? 'heater oxide';
  const filamentVolts = own.filament ?? type?.heater.volts ?? (cathode === 'heater oxide' ? 6.3 : 2);
  const grid = gridLaw(list, cathode);
  const rowVolts = own['fit at plate volts'];
  const options: SocketOptions = {
    supplyVolts: list.plate.supply,
    strays: {
      gridPlateFarads: list.strays['grid to plate'],
      gridCathodeFarads: list.strays.grid,
      plateCathodeFarads: list.strays.plate,
    },
    where: rowVolts === undefined ? (own.rows ? 'tube.rows' : 'detector.tube') : 'tube.fit at plate volts',
    ...(rowVolts === undefined ? {} : { rowPlateVolts: rowVolts }),
    ...(grid === null ? {} : { grid }),
  };
  const capacitances = capacitancesOf(list, type);
  const rows = own.rows?.map((row) => ({
    plateVolts: row.plate,
    gridVolts: row.grid,
    plateAmps: row.current,
    ...(row.mu === undefined ? {} : { mu: row.mu }),
    ...(row.slope === undefined ? {} : { siemens: row.slope }),
    ...(row['plate resistance'] === undefined ? {} : { plateOhms: row['plate resistance'] }),
  }));
  const socketed = rows
    ? asListed(() =>
        ownTube({ type: list.detector.tube, cathode, heaterVolts: filamentVolts, rows, ...capacitances, ...options }),
      )
    : socket((type as TubeType).name, (type as TubeType).rows, cathode, filamentVolts, capacitances, options);
  const volts = socketed.errors.map(({ row }) => row.plateVolts);
  return {
    tube: socketed.tube,
    cathode,
    filamentVolts,
    ratings: type
      ? {
          plateVolts: type.ratings.maxPlateVolts,
          plateWatts: type.ratings.maxPlateWatts,
          tubeSource: `${type.ratings.source}, ${type.ratings.recall}`,
        }
      : null,
    cautions: outsideRows(list.plate.supply, volts),
  };
}

/** Does what the engine does of a tube; its third row or reading is at `….2`, as the list's places are kept. */
function asListed<T>(work: () => T): T {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    const listed = (where: string): string =>
      where.replace(/^(tube\.rows|tube\.grid current\.readings)(?:\.rows)? (\d+)$/, (_, key: string, nth: string) => {
        return `${key}.${Number(nth) - 1}`;
      });
    throw new InputError(error.faults.map((fault) => ({ ...fault, where: listed(fault.where) })));
  }
}

function outsideRows(supplyVolts: number, rowVolts: readonly number[]): Caution[] {
  const lowest = Math.min(...rowVolts);
  const highest = Math.max(...rowVolts);
  if (supplyVolts < lowest / OUTSIDE_ROWS) return [{ code: 'outside-rows', figure: supplyVolts, limit: lowest }];
  if (supplyVolts > highest * OUTSIDE_ROWS) return [{ code: 'outside-rows', figure: supplyVolts, limit: highest }];
  return [];
}

function capacitancesOf(list: CircuitList, type: TubeType | null): Strays {
  const own = list.tube.capacitances;
  // a small triode's, for a builder's own tube that states none: common practice, no source
  const known = type?.capacitances ?? { gridPlateFarads: 3e-12, gridCathodeFarads: 3e-12, plateCathodeFarads: 3e-12 };
  return {
    gridPlateFarads: own['grid to plate'] ?? known.gridPlateFarads,
    gridCathodeFarads: own['grid to cathode'] ?? known.gridCathodeFarads,
    plateCathodeFarads: own['plate to cathode'] ?? known.plateCathodeFarads,
  };
}

/** A grid law given by the list, or null where the catalogue's assumption stands. */
function gridLaw(list: CircuitList, cathode: CathodeKind): GridLaw | null {
  const written = list.tube['grid current'];
  const { readings } = written;
  const zero = written['at zero volts'];
  const thermal = written['thermal voltage'];
  if (readings) {
    if (zero !== undefined || thermal !== undefined) {
      throw new InputError({
        code: 'two-grid-laws',
        where: 'tube.grid current.readings',
        got: 'readings beside a stated grid current',
        expected: 'either two readings of the free grid, or its current at zero volts',
      });
    }
    const [first, second] = readings.map((reading) => ({
      gridVolts: reading.grid,
      leakOhms: reading.leak,
      returnVolts: reading['leak returns to'] ?? 0,
    }));
    if (first && second) {
      return asListed(() => gridLawFromReadings([first, second], undefined, 'tube.grid current.readings'));
    }
  }
  if (zero === undefined && thermal === undefined) return null;
  const assumed = assumedGridCurrent(cathode);
  return gridLawFromZeroCurrent(zero ?? assumed.ampsAtZeroVolts, thermal ?? assumed.thermalVolts);
}
