import type { CathodeKind, TriodeRow } from './fitting.ts';
import { thermalVolts } from './thermal-voltage.ts';

/** How well a printed number is known: read in a page that is named, or recalled. */
export type Recall = 'seen' | 'from memory, cross-checked' | 'from memory' | 'from memory, doubtful';

export interface Sourced {
  /** Title and edition of the data sheet or manual, or the address of the page. */
  readonly source: string;
  readonly recall: Recall;
}

/** A typical-operation row as printed, with where it was printed. */
export interface PublishedRow extends TriodeRow, Sourced {}

export interface Heater extends Sourced {
  readonly volts: number;
  readonly amps: number;
  readonly note?: string;
}

export interface Ratings extends Sourced {
  readonly maxPlateVolts: number;
  /** W, of one unit; null where no rating is printed. */
  readonly maxPlateWatts: number | null;
}

/** Direct capacitances of the tube alone, F, without shield, socket or wiring. */
export interface Capacitances extends Sourced {
  readonly gridPlateFarads: number;
  readonly gridCathodeFarads: number;
  readonly plateCathodeFarads: number;
}

/** What is assumed of the grid current, since no data sheet prints it. */
export interface GridCurrentAssumption {
  readonly ampsAtZeroVolts: number;
  /** V, kT/e of the cathode. */
  readonly thermalVolts: number;
  readonly note: string;
}

/** One tube type of the catalogue; for a double triode everything is for one unit. */
export interface TubeType {
  readonly name: string;
  readonly otherNames: readonly string[];
  readonly cathode: CathodeKind;
  readonly heater: Heater;
  /** By rising plate voltage. */
  readonly rows: readonly PublishedRow[];
  readonly ratings: Ratings;
  readonly capacitances: Capacitances;
  readonly note?: string;
}

/** The manual most rows come from. The page is named by the type; page numbers were not seen. */
export function manualPage(type: string): string {
  return `RCA Receiving Tube Manual, RC-11 to RC-30, data page of the ${type}`;
}

/** One row as a manual prints it: volts, volts, milliamperes, mu, micromhos, ohms. */
export function publishedRow(
  plateVolts: number,
  gridVolts: number,
  milliamperes: number,
  mu: number,
  micromhos: number,
  plateOhms: number,
  source: string,
  recall: Recall,
): PublishedRow {
  return {
    plateVolts,
    gridVolts,
    plateAmps: milliamperes / 1e3,
    mu,
    siemens: micromhos / 1e6,
    plateOhms,
    source,
    recall,
  };
}

/** Capacitances as printed, in pF: grid to plate, grid to cathode, plate to cathode. */
export function picofarads(
  gridPlate: number,
  gridCathode: number,
  plateCathode: number,
  source: string,
  recall: Recall,
): Capacitances {
  return {
    gridPlateFarads: gridPlate / 1e12,
    gridCathodeFarads: gridCathode / 1e12,
    plateCathodeFarads: plateCathode / 1e12,
    source,
    recall,
  };
}

/**
 * The grid current assumed for a kind of cathode: its temperature from Terman, Radio Engineers' Handbook, 1943, section 4
 * (from memory), its current at zero volts of the order of published fits of small receiving triodes, 1 to 30 µA
 * (Dempwolf and Zölzer, DAFx-11, 2011, from memory). An assumption: two readings of the free grid replace it.
 */
export function assumedGridCurrent(cathode: CathodeKind): GridCurrentAssumption {
  const [kelvin, ampsAtZeroVolts] =
    cathode === 'heater oxide' ? [1050, 10e-6] : cathode === 'filament oxide' ? [1000, 3e-6] : [1900, 3e-6];
  return {
    ampsAtZeroVolts,
    thermalVolts: thermalVolts(kelvin),
    note: `assumed: ${ampsAtZeroVolts * 1e6} µA at 0 V and a cathode at ${kelvin} K; no data sheet prints it, and two readings of the free grid replace it`,
  };
}

/** Where the leak of a grid-leak detector is best returned. */
export type LeakReturn = 'cathode' | 'filament -' | 'filament +';

/**
 * The advice of the manuals: battery tubes return the grid to positive filament, heater tubes to the cathode
 * (RCA Receiving Tube Manual, R-10 and RC series, chapter on detection, from memory).
 */
export function adviseLeakReturn(cathode: CathodeKind): LeakReturn {
  return cathode === 'heater oxide' ? 'cathode' : 'filament +';
}

/**
 * Volts against the cathode to which a leak returns: 0 for the cathode and the negative end of a filament, the filament
 * voltage for its positive end. A heater is no point to return a grid to: null there.
 */
export function leakReturnVolts(cathode: CathodeKind, heaterVolts: number, to: LeakReturn): number | null {
  if (to === 'cathode') return 0;
  if (cathode === 'heater oxide') return null;
  return to === 'filament +' ? heaterVolts : 0;
}
