import { averagingCautions } from './averaging-cautions.ts';
import { partCautions } from './part-cautions.ts';
import type { RestPoint } from './rest-point.ts';
import { signalCautions } from './signal-cautions.ts';

/** What is known of the parts beyond the values the equations use; null or absent: not known. */
export interface Ratings {
  /** Of the tube, as its sheet prints them. */
  readonly plateVolts: number | null;
  readonly plateWatts: number | null;
  readonly tubeSource?: string;
  /** Direct current that the winding in the plate lead is made for, A. */
  readonly windingAmps?: number | null;
  readonly windingSource?: string;
  /** Capacity of the B battery, A·h. */
  readonly batteryAmpHours?: number | null;
  /** Whether the stage feeds the grid of another one. */
  readonly feedsGrid?: boolean;
}

/** What a caution is about; the sentence, and what `figure`, `limit` and `further` stand for, follow from it. */
export type CautionCode =
  | 'shock'
  | 'phones-in-plate'
  | 'plate-volts'
  | 'plate-watts'
  | 'resistor-watts'
  | 'winding-amps'
  | 'battery-life'
  | 'next-grid-volts'
  | 'small-grid-capacitor'
  | 'slope-limit'
  | 'peak-clipping'
  | 'carrier-on-plate'
  | 'ripple'
  | 'plate-harmonic'
  | 'bare-plate'
  | 'little-bypass'
  | 'slow-carrier'
  | 'outside-rows'
  | 'bypass-inaudible'
  | 'textbook'
  | 'limited'
  | 'unsettled';

/** Something the builder should know: a code for the sentence, the figure that raised it and the limit it passed. */
export interface Caution {
  readonly code: CautionCode;
  readonly figure: number;
  readonly limit: number;
  /** One more figure that the sentence needs, such as what is lost or what would do. */
  readonly further?: number;
  /** The part it is about, where the code alone does not say. */
  readonly name?: string;
  /** Where the limit comes from, where the code alone does not say. */
  readonly source?: string;
}

/** Cautions that follow from the rest point, the signal and the parts; what can hurt comes first. */
export function restCautions(rest: RestPoint, ratings: Ratings | null): Caution[] {
  // a diode has no supply and no plate to overload
  const parts = rest.circuit.detector.diode ? [] : partCautions(rest, ratings);
  return [...parts, ...signalCautions(rest, ratings), ...averagingCautions(rest)];
}
