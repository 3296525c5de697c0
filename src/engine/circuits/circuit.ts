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

export type DetectorKind = 'grid leak' | 'plate bend' | 'infinite impedance' | 'diode' | 'crystal';

/** Current law of a diode or crystal between its two ends. */
export type DiodeLaw =
  /** i = saturation·(exp((v − i·series)/ideality) − 1) */
  | {
      readonly kind: 'exponential';
      readonly saturationAmps: number;
      readonly idealityVolts: number;
      readonly seriesOhms: number;
    }
  /** Vacuum diode: perveance·(ln(1 + exp(sharpness·v))/sharpness)^1.5 */
  | { readonly kind: '3/2'; readonly perveance: number; readonly sharpness: number };

/** Diode or crystal with its load; what it feeds is the circuit's output. */
export interface DiodeParts {
  readonly law: DiodeLaw;
  /** Ohms across which the diode charges the bypass; null: the output alone is the load. */
  readonly loadOhms: number | null;
  /** F across the load, 0 allowed. */
  readonly bypassFarads: number;
  /** Resistor from the load to a second capacitor; null: none. */
  readonly filterOhms: number | null;
  readonly filterFarads: number;
  /** Part of the output that the volume control passes on, 0 to 1. */
  readonly volume: number;
  /** F between the diode's ends. */
  readonly capacitanceFarads: number;
}

/** What stands in the cathode lead, or the bias that stands in its place. */
export interface CathodeParts {
  /** Ohms; null: the cathode is at chassis level. */
  readonly ohms: number | null;
  readonly farads: number;
  /** V of a battery in the grid's lead, below 0 for bias; 0: none. */
  readonly biasVolts: number;
}

/**
 * A detector. The values of a grid leak stand in every one, and are used by the grid leak alone; plate bend and infinite
 * impedance have `cathode`, diode and crystal have `diode`.
 */
export interface GridLeakDetector {
  readonly kind: DetectorKind;
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
  readonly cathode?: CathodeParts;
  readonly diode?: DiodeParts;
}

export type Detector = GridLeakDetector;

export interface ResistorLoad {
  readonly kind: 'resistor';
  readonly ohms: number;
}

/** Choke from supply to plate; core loss and self-capacitance lie across the whole of it. */
export interface ChokeLoad {
  readonly kind: 'choke';
  readonly henries: number;
  readonly dcOhms: number;
  /** Ohms; null: none. */
  readonly coreLossOhms: number | null;
  /** F; null: none. */
  readonly selfFarads: number | null;
}

/** What a winding with an iron core loses to direct current: inductance without it, and at a stated current. */
export interface FallingInductance {
  readonly henriesWithoutCurrent: number;
  readonly amps: number;
  readonly henriesAtAmps: number;
}

/** A transformer of ratio 1:n, everything but the secondary's own values on the primary side. */
export interface Transformer {
  /** Secondary volts a primary volt, above 0. */
  readonly ratio: number;
  /** H, at the rest current. */
  readonly primaryHenries: number;
  readonly primaryDcOhms: number;
  readonly leakageHenries: number;
  /** Ohms; null: none. */
  readonly coreLossOhms: number | null;
  readonly primaryFarads: number;
  readonly secondaryDcOhms: number;
  readonly secondaryFarads: number;
}

/** Interstage transformer, primary from supply to plate. */
export interface TransformerLoad extends Transformer {
  readonly kind: 'transformer';
  /** How the primary's inductance falls; null: it does not, or is not known. */
  readonly falling: FallingInductance | null;
}

/** Magnetic phones or an earpiece; the three resonance values stand together or are null together. */
export interface Phones {
  readonly dcOhms: number;
  readonly henries: number;
  /** Ohms across the inductance; null: none. */
  readonly eddyLossOhms: number | null;
  /** F across the whole; null: none. */
  readonly selfFarads: number | null;
  /** The diaphragm's resonance as a parallel R, L, C in series with the coil. */
  readonly resonanceOhms: number | null;
  readonly resonanceHenries: number | null;
  readonly resonanceFarads: number | null;
}

/** Phones in the plate lead, from supply to plate. */
export interface PhonesLoad extends Phones {
  readonly kind: 'phones';
}

export type PlateLoad = ResistorLoad | ChokeLoad | TransformerLoad | PhonesLoad;

/** Choke that keeps the carrier out of the load, with the bypass behind it. */
export interface CarrierChoke {
  readonly henries: number;
  readonly dcOhms: number;
  readonly selfFarads: number | null;
  /** From the load's end of the choke to the cathode, F, 0 allowed. */
  readonly bypassFarads: number;
}

/** Resistor in the supply lead, with the capacitor from its far end to the cathode. */
export interface DroppingResistor {
  readonly ohms: number;
  readonly farads: number;
}

export interface Plate {
  /** Supply voltage, V, 0 and up. */
  readonly supplyVolts: number;
  /** Bypass from plate to cathode, F; 0 is allowed (strays stay). */
  readonly bypassFarads: number;
  /** Leakage of a failing bypass, ohms; absent or null: none. */
  readonly bypassLeakOhms?: number | null;
  readonly load: PlateLoad;
  /** Absent or null: none. */
  readonly carrierChoke?: CarrierChoke | null;
  readonly dropping?: DroppingResistor | null;
}

/** What the stage feeds: R in parallel with C, or phones, behind a coupling capacitor where there is one. */
export interface Output {
  /** F; null: none, straight on (after a transformer, or with the phones in the plate lead). */
  readonly couplingFarads: number | null;
  /** Leakage of a failing coupling capacitor, ohms; absent or null: none. */
  readonly couplingLeakOhms?: number | null;
  /** Ohms; null: open. */
  readonly loadOhms: number | null;
  readonly loadFarads: number;
  /** Matching transformer ahead of what is fed; absent or null: none. */
  readonly matching?: Transformer | null;
  /** Phones that are fed, heard by their coil current; absent or null: none. */
  readonly phones?: Phones | null;
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
