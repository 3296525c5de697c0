import { type Fault, InputError } from '../errors.ts';
import { formatQuantity } from '../parts/format-quantity.ts';
import type { GridLaw } from './grid-law.ts';
import { gridDerivatives, plateKnee, triodePoint } from './laws.ts';
import type { TubeLaw } from './tube.ts';

/** One published typical-operation row of a triode, as a data sheet prints it. */
export interface TriodeRow {
  /** V, plate to cathode (filament negative), above 0. */
  readonly plateVolts: number;
  /** V, grid to cathode. */
  readonly gridVolts: number;
  /** A, above 0. */
  readonly plateAmps: number;
  /** Amplification factor, above 1. */
  readonly mu: number;
  /** Transconductance, S, above 0. */
  readonly siemens: number;
  /** Plate resistance, ohms, above 0. */
  readonly plateOhms: number;
}

/** How the cathode is made, which fixes its temperature and where its bias is counted from. */
export type CathodeKind = 'heater oxide' | 'filament oxide' | 'filament thoriated';

/** Exponent of the cathode law unless curve points say otherwise: Child and Langmuir's 3/2. */
export const CATHODE_EXPONENT = 1.5;
/** Sharpness of the cut-off knee, 1/V, unless curve points say otherwise (6SL7 cut-off points give 2.1 to 4.4). */
export const CATHODE_SHARPNESS = 3.5;

export interface RowFitOptions {
  readonly gamma?: number;
  /** C, 1/V. */
  readonly sharpness?: number;
  /** Name of the row in a fault. */
  readonly where?: string;
}

/**
 * The law of a triode from one published row: plate current and transconductance are met exactly at that row, with the
 * grid's own current and the plate knee counted in.
 *
 * Mu is the row's. With I_k = (I_p + I_g)/s and its slope (g_m + I_g')/s known, the ratio of the two is
 * L/(γ·C·σ), a rising function of C·u alone (L the softplus, σ its logistic), so u comes from one root, phi from
 * u − v_g − v_p/mu, and G from the current. Derived here.
 *
 * @throws InputError `row-not-positive` or `row-too-steep` (more transconductance than that current can have)
 */
export function lawFromRow(row: TriodeRow, grid: GridLaw, options: RowFitOptions = {}): TubeLaw {
  const gamma = options.gamma ?? CATHODE_EXPONENT;
  const C = options.sharpness ?? CATHODE_SHARPNESS;
  const where = options.where ?? 'tube row';
  if (!(row.plateVolts > 0 && row.plateAmps > 0 && row.siemens > 0 && row.mu > 1 && Number.isFinite(row.gridVolts))) {
    throw new InputError({
      code: 'row-not-positive',
      where,
      got: rowText(row),
      expected: 'plate volts, plate current and transconductance above 0, and mu above 1',
    });
  }
  const gridPoint = new Float64Array(3);
  gridDerivatives({ G: 0, C, gamma, mu: row.mu, phi: 0, ...grid }, row.gridVolts, gridPoint);
  const knee = plateKnee(row.plateVolts);
  const cathodeCurrent = (row.plateAmps + gridPoint[0]!) / knee;
  const cathodeSlope = (row.siemens + gridPoint[1]!) / knee;
  const wanted = (gamma * C * cathodeCurrent) / cathodeSlope;
  if (!(wanted > 1 + 1e-9)) {
    throw new InputError({
      code: 'row-too-steep',
      where,
      got: rowText(row),
      expected: `a transconductance below ${formatQuantity(gamma * C * cathodeCurrent * knee, 'number')} S at that plate current`,
      hint: 'check plate current and transconductance: mA and µmho are easily misplaced by a factor of ten',
    });
  }
  // the ratio at z lies above z, so the root lies below `wanted`; at z = -40 the ratio is 1 to working precision
  let below = -40;
  let above = wanted;
  for (let i = 0; i < 200 && above - below > 1e-15 * Math.max(1, Math.abs(above)); i++) {
    const z = 0.5 * (below + above);
    if (softplusOverLogistic(z) < wanted) below = z;
    else above = z;
  }
  const z = 0.5 * (below + above);
  const phi = z / C - row.gridVolts - row.plateVolts / row.mu;
  return { G: cathodeCurrent / (softplus(z) / C) ** gamma, C, gamma, mu: row.mu, phi, ...grid };
}

function softplus(z: number): number {
  return z > 0 ? z + Math.log1p(Math.exp(-z)) : Math.log1p(Math.exp(z));
}

function softplusOverLogistic(z: number): number {
  return softplus(z) * (1 + Math.exp(-z));
}

function rowText(row: TriodeRow): string {
  return `${formatQuantity(row.plateAmps, 'current')} and ${formatQuantity(row.siemens * 1e3, 'number')} mS at ${formatQuantity(row.plateVolts, 'voltage')}, grid ${formatQuantity(row.gridVolts, 'voltage')}, mu ${formatQuantity(row.mu, 'number')}`;
}

/**
 * The row whose plate voltage is nearest to the supply. Of two equally near, the lower plate voltage, then the grid
 * nearer to zero, where a grid-leak detector rests; then the first.
 *
 * @param rows  one or more
 */
export function nearestRow<Row extends TriodeRow>(rows: readonly Row[], supplyVolts: number): Row {
  const rank = (row: Row): readonly number[] => [
    Math.abs(row.plateVolts - supplyVolts),
    row.plateVolts,
    Math.abs(row.gridVolts),
  ];
  return rows.reduce((best, row) => (before(rank(row), rank(best)) ? row : best));
}

function before(a: readonly number[], b: readonly number[]): boolean {
  for (let i = 0; i < a.length; i++) {
    if (a[i]! !== b[i]!) return a[i]! < b[i]!;
  }
  return false;
}

/** How far a law is from one published row; positive where the law gives more than the row. */
export interface RowError<Row extends TriodeRow = TriodeRow> {
  readonly row: Row;
  readonly plateAmps: number;
  readonly plateCurrentPercent: number;
  readonly siemens: number;
  readonly transconductancePercent: number;
}

/** The law's plate current and transconductance at every row, with the error against the row in percent. */
export function rowErrors<Row extends TriodeRow>(law: TubeLaw, rows: readonly Row[]): RowError<Row>[] {
  return rows.map((row) => {
    const point = triodePoint(law, row.gridVolts, row.plateVolts);
    return {
      row,
      plateAmps: point.plateAmps,
      plateCurrentPercent: 100 * (point.plateAmps / row.plateAmps - 1),
      siemens: point.siemens,
      transconductancePercent: 100 * (point.siemens / row.siemens - 1),
    };
  });
}

/**
 * Contact potentials that published rows give, V: a heater's with its initial velocity, and a filament's, whose bias is
 * quoted from the negative end and is therefore short of about half the filament voltage.
 * Source: the rows of the catalogue themselves, all of which lie inside.
 */
export function contactPotentialRange(cathode: CathodeKind, filamentVolts: number): readonly [number, number] {
  return cathode === 'heater oxide' ? [0.4, 1.5] : [-filamentVolts, 0];
}

/** Contact potential with initial velocity (V) that a row shows by the plain 3/2 law: 1.5·I_p/g_m − (v_g + v_p/mu). */
export function rowContactPotential(row: TriodeRow): number {
  return (1.5 * row.plateAmps) / row.siemens - (row.gridVolts + row.plateVolts / row.mu);
}

/**
 * A caution when a row's contact potential is one that no published row of that kind of cathode gives; null when it is
 * plausible. The plain 3/2 law is used on purpose: it needs no assumption about knee or grid current.
 */
export function contactPotentialCaution(
  row: TriodeRow,
  cathode: CathodeKind,
  filamentVolts: number,
  where = 'tube row',
): Fault | null {
  const phi = rowContactPotential(row);
  const [least, most] = contactPotentialRange(cathode, filamentVolts);
  // half of the last digit printed in the range
  if (phi >= least - 0.05 && phi <= most + 0.05) return null;
  return {
    code: 'contact-potential-unlikely',
    where,
    got: formatQuantity(phi, 'voltage', 3),
    expected: `${formatQuantity(least, 'voltage')} to ${formatQuantity(most, 'voltage')} for ${cathode === 'heater oxide' ? 'a heater' : 'a filament'}`,
    hint: 'the row is probably mistyped: check grid bias, plate current and transconductance',
  };
}
