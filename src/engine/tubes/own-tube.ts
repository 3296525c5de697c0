import { type Fault, InputError } from '../errors.ts';
import { formatQuantity } from '../parts/format-quantity.ts';
import type { CathodeKind, TriodeRow } from './fitting.ts';
import { type SocketedTube, type SocketOptions, socket } from './socketed-tube.ts';

/** A row from a builder's own data sheet: one of mu, siemens and plateOhms may be left out (mu = siemens · plateOhms). */
export type OwnRow = Omit<TriodeRow, 'mu' | 'siemens' | 'plateOhms'> &
  Partial<Pick<TriodeRow, 'mu' | 'siemens' | 'plateOhms'>>;

export interface OwnTube extends SocketOptions {
  readonly type: string;
  readonly cathode: CathodeKind;
  /** Heater or filament volts, above 0. */
  readonly heaterVolts: number;
  readonly rows: readonly OwnRow[];
  /** Of the tube alone, F, each 0 or more. */
  readonly gridPlateFarads: number;
  readonly gridCathodeFarads: number;
  readonly plateCathodeFarads: number;
}

/** How far mu may be from transconductance times plate resistance: the worst printed row misses by 2.2 %. */
const ROW_CONSISTENCY = 0.1;

/**
 * A tube from a builder's own data-sheet rows, made in the same way as one of the catalogue.
 *
 * @throws InputError with every fault of the rows and capacitances: `no-rows`, `row-not-positive`, `row-incomplete`,
 *   `row-inconsistent` (mu off transconductance times plate resistance by more than 10 %), `capacitance-negative`, and those of the catalogue
 */
export function ownTube(spec: OwnTube): SocketedTube {
  const where = spec.where ?? 'tube';
  const faults: Fault[] = [];
  if (spec.rows.length === 0) {
    faults.push({ code: 'no-rows', where, got: 'none', expected: 'one row of the data sheet or more' });
  }
  const rows = spec.rows.map((row, index) => completeRow(row, `${where}.rows ${index + 1}`, faults));
  for (const key of ['gridPlateFarads', 'gridCathodeFarads', 'plateCathodeFarads'] as const) {
    if (!(spec[key] >= 0 && Number.isFinite(spec[key]))) {
      faults.push({
        code: 'capacitance-negative',
        where: `${where}.${key}`,
        got: String(spec[key]),
        expected: '0 pF or more',
      });
    }
  }
  if (!(spec.heaterVolts > 0 && Number.isFinite(spec.heaterVolts))) {
    faults.push({
      code: 'heater-not-positive',
      where: `${where}.heaterVolts`,
      got: String(spec.heaterVolts),
      expected: 'volts above 0',
    });
  }
  if (faults.length > 0) throw new InputError(faults);
  return socket(spec.type, rows, spec.cathode, spec.heaterVolts, spec, spec);
}

function completeRow(row: OwnRow, where: string, faults: Fault[]): TriodeRow {
  const complete: TriodeRow = {
    ...row,
    mu: row.mu ?? (row.siemens ?? Number.NaN) * (row.plateOhms ?? Number.NaN),
    siemens: row.siemens ?? (row.mu ?? Number.NaN) / (row.plateOhms ?? Number.NaN),
    plateOhms: row.plateOhms ?? (row.mu ?? Number.NaN) / (row.siemens ?? Number.NaN),
  };
  const missing = (['mu', 'siemens', 'plateOhms'] as const).filter((key) => row[key] === undefined);
  if (missing.length > 1) {
    faults.push({
      code: 'row-incomplete',
      where,
      got: `no ${missing.join(', no ')}`,
      expected: 'two of amplification factor, transconductance and plate resistance',
    });
    return complete;
  }
  const positive = complete.plateVolts > 0 && complete.plateAmps > 0 && complete.siemens > 0 && complete.plateOhms > 0;
  const values = Object.values(complete) as number[];
  if (!positive || !(complete.mu > 1) || !values.every(Number.isFinite)) {
    faults.push({
      code: 'row-not-positive',
      where,
      got: `${complete.plateVolts} V, ${complete.gridVolts} V, ${complete.plateAmps} A, mu ${complete.mu}, ${complete.siemens} S, ${complete.plateOhms} ohms`,
      expected: 'plate volts, plate current, transconductance and plate resistance above 0, and mu above 1',
    });
    return complete;
  }
  const product = complete.siemens * complete.plateOhms;
  if (Math.abs(product / complete.mu - 1) > ROW_CONSISTENCY) {
    faults.push({
      code: 'row-inconsistent',
      where,
      got: `mu ${formatQuantity(complete.mu, 'number')}, but transconductance times plate resistance is ${formatQuantity(product, 'number')}`,
      expected: 'mu within 10 % of transconductance times plate resistance',
      hint: 'one of the three is mistyped, or the transconductance is in mA/V where µmho was meant',
    });
  }
  return complete;
}
