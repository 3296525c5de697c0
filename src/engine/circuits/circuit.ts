import type { Tube } from '../tubes/tube.ts';

/** The wanted station as the receiver meets it. Levels are rms of the unmodulated carrier. */
export interface Station {
  /** Carrier frequency, Hz, 10 kHz to 30 MHz. */
  readonly carrierHertz: number;
  /** V rms: at the tap with no detector connected (coil given), or at the detector's input (stiff). 0 is allowed. */
  readonly levelVoltsRms: number;
  /** Peak modulation depth, 0 to 1 (above 1 the limiter acts). */
  readonly modulation: number;
}

/** A stiff source: Q and level at the detector are what is stated, whatever the detector draws. */
export interface StiffCircuit {
  readonly kind: 'stiff';
  /** Loaded Q, above 0. */
  readonly loadedQ: number;
  /** Station minus resonance, Hz. */
  readonly detuneHertz: number;
}

/** The coil as built: the detector loads it. */
export interface CoilCircuit {
  readonly kind: 'coil';
  /** Inductance of the whole coil, H. */
  readonly coilHenries: number;
  /** Q of the coil and its tuning capacitor alone. */
  readonly unloadedQ: number;
  /** Part of the coil's voltage at the detector, 0 < tap <= 1. */
  readonly tap: number;
  /** Whether the dial is set again after the detector's capacitance has pulled the resonance. */
  readonly retuned: boolean;
  /** Station minus resonance as the dial is set, Hz, before any pull. */
  readonly detuneHertz: number;
}

export type TunedCircuit = StiffCircuit | CoilCircuit;

export interface GridLeakDetector {
  readonly kind: 'grid leak';
  /** The tube's own law, or a textbook law in place of its grid and a linear plate. */
  readonly law: 'tube' | 'square' | 'linear';
  /** F, above 0. */
  readonly gridCapacitorFarads: number;
  /** Ohms, finite, above 0. */
  readonly leakOhms: number;
  readonly leakPosition: 'to cathode' | 'across capacitor';
  /** Volts to which the leak (and, for a leak across the capacitor, the coil) returns, against the cathode. */
  readonly leakReturnVolts: number;
  /** Leakage of the grid capacitor itself, ohms, besides a leak; null when there is none. */
  readonly capacitorLeakageOhms: number | null;
  /** Charging resistance of the `linear` law, ohms; null: leak / 1000. */
  readonly chargeOhms: number | null;
}

export type Detector = GridLeakDetector;

export interface ResistorLoad {
  readonly kind: 'resistor';
  readonly ohms: number;
}

export type PlateLoad = ResistorLoad;

export interface Plate {
  /** Supply voltage, V, 0 and up. */
  readonly supplyVolts: number;
  /** Bypass from plate to cathode, F; 0 is allowed (strays stay). */
  readonly bypassFarads: number;
  readonly load: PlateLoad;
}

/** What follows the plate: a coupling capacitor into R in parallel with C. */
export interface Output {
  readonly couplingFarads: number;
  readonly loadOhms: number;
  readonly loadFarads: number;
}

/** One detector, complete: everything the equations use, in SI units. */
export interface DetectorCircuit {
  readonly station: Station;
  readonly tunedCircuit: TunedCircuit;
  readonly detector: Detector;
  readonly tube: Tube;
  readonly plate: Plate;
  readonly output: Output;
}
