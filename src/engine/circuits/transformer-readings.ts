import { type Fault, InputError } from '../errors.ts';
import { TransformerOnTheBench } from './transformer-bench.ts';

/** What is read of a transformer on the bench, driven from a generator with a known resistance in series. */
export interface TransformerReadings {
  /** Turns of the secondary a turn of the primary: secondary volts a primary volt at mid frequencies. */
  readonly ratio: number;
  /** Generator with the added resistor, ohms. */
  readonly sourceOhms: number;
  /** What the secondary was loaded with, the meter included, ohms; null: nothing to speak of. */
  readonly loadOhms: number | null;
  /** Capacitance of meter and leads across the secondary, F. */
  readonly meterFarads: number;
  /** Frequency below mid at which the output is 3 dB down, Hz. */
  readonly lowCornerHertz: number;
  /** Frequency of the highest output above mid, Hz, and its height over mid, dB, above 0. */
  readonly peakHertz: number;
  readonly peakDecibels: number;
  /** How far the primary stands below the open generator at mid frequencies, dB, 0 and up: tells the core loss; null: not read. */
  readonly midLossDecibels: number | null;
  /** From the meter, ohms. */
  readonly primaryDcOhms: number;
  readonly secondaryDcOhms: number;
}

/** The values that explain the readings. */
export interface ReadTransformer {
  readonly primaryHenries: number;
  readonly leakageHenries: number;
  readonly secondaryFarads: number;
  /** Null: none that could be told from none. */
  readonly coreLossOhms: number | null;
  /** Not read, for it hardly shows: a typical one. */
  readonly primaryFarads: number;
}

/** Core loss that stands where none was read, ohms a henry of primary. Common practice, no source: 8 to 10 kΩ. */
const TYPICAL_CORE_OHMS_A_HENRY = 9e3;
/** Capacitance of a primary, F. Common practice, no source: 40 to 60 pF. */
const TYPICAL_PRIMARY_FARADS = 50e-12;
/** Loss that a meter tells from none, dB. */
const LEAST_LOSS_DECIBELS = 0.005;
/** Logarithm of a level to which the readings are met: far below what a meter shows. */
const MET = 1e-6;

/**
 * Transformer values from bench readings: those with which the program's own network gives the same readings. Mid is
 * the geometric middle between low corner and peak.
 *
 * @throws InputError `reading-not-positive`, `no-peak` (a peak below 0.1 dB tells nothing), `damped-away`,
 *         `no-such-transformer`
 */
export function transformerFromReadings(readings: TransformerReadings): ReadTransformer {
  refuse(readings);
  const bench = new TransformerOnTheBench(readings, TYPICAL_PRIMARY_FARADS);
  const { midLossDecibels: loss } = readings;
  const guess = firstGuess(readings, 0);
  if (loss === null) {
    const typical = bench.solve(guess, 'in proportion', TYPICAL_CORE_OHMS_A_HENRY, MET);
    // a peak that a typical core would not let stand
    return taken(readings, typical ?? bench.solve(guess, 'none', 0, MET));
  }
  const without = bench.solve(guess, 'none', 0, MET);
  if (without !== null && Math.abs(bench.lossDecibels(without) - loss) < LEAST_LOSS_DECIBELS) {
    return taken(readings, without);
  }
  const core = coreGuess(readings);
  return taken(readings, core > 0 ? bench.solve(firstGuess(readings, core), 'read', 1 / core, MET) : null);
}

/** The answer less the meter's capacitance; a fault when there is none. */
function taken(readings: TransformerReadings, found: ReadTransformer | null): ReadTransformer {
  if (found === null || found.secondaryFarads < readings.meterFarads) {
    throw new InputError({
      code: 'no-such-transformer',
      where: 'readings',
      got: 'readings that no values explain together',
      expected: 'low corner, peak and loss of one transformer, read with the stated source, load and meter',
      hint: 'read the source resistance again, and the height over the flat middle of the response',
    });
  }
  return { ...found, secondaryFarads: found.secondaryFarads - readings.meterFarads };
}

/** What draws at mid frequencies, less what the load draws: the core, S. */
function coreGuess(readings: TransformerReadings): number {
  const share = 10 ** (-(readings.midLossDecibels ?? 0) / 20);
  const drawn = (readings.sourceOhms * share) / (1 - share) - readings.primaryDcOhms;
  return 1 / drawn - loadSiemens(readings);
}

/** The load as the primary meets it, S. */
function loadSiemens({ ratio, loadOhms, secondaryDcOhms }: TransformerReadings): number {
  return loadOhms === null ? 0 : (ratio * ratio) / (loadOhms + secondaryDcOhms);
}

/**
 * A first guess. Below mid frequencies the primary inductance stands across the source's and the load's resistances in
 * parallel, so at the corner its reactance is that. Above, leakage and secondary capacitance are a low-pass of second
 * order between source and load: peak frequency and height give its resonance and Q, and these the two values.
 *
 * @param coreSiemens  what the core draws beside the load
 */
function firstGuess(readings: TransformerReadings, coreSiemens: number): ReadTransformer {
  const square = readings.ratio * readings.ratio;
  const series = readings.sourceOhms + readings.primaryDcOhms;
  const load = loadSiemens(readings) + coreSiemens;
  const height = 10 ** (readings.peakDecibels / 20);
  // peak of Q/√(1 − 1/4Q²): with q = Q², height² = q²/(q − 1/4)
  const q = (height * height + height * Math.sqrt(height * height - 1)) / 2;
  const omega = (2 * Math.PI * readings.peakHertz) / Math.sqrt(1 - 1 / (2 * q));
  const total = series + readings.secondaryDcOhms / square;
  const k = 1 / (1 + total * load);
  // L·C = 1/(k·ω²) and L·load + R·C = 1/(k·Q·ω): the smaller root is the source-damped one
  const b = 1 / (k * Math.sqrt(q) * omega);
  const c = total / (k * omega * omega);
  const root = b * b - 4 * c * load;
  if (!(root >= 0)) {
    throw new InputError({
      code: 'damped-away',
      where: 'height',
      got: `${readings.peakDecibels} dB with that load`,
      expected: 'a peak that the stated load resistance allows',
      hint: 'read it with less load, or state the load that was there',
    });
  }
  // 2c/(b + √…): the small root without cancellation; in the unloaded case c/b
  const leakageHenries = (2 * c) / (b + Math.sqrt(root));
  return {
    primaryHenries: 1 / ((1 / series + load) * 2 * Math.PI * readings.lowCornerHertz),
    leakageHenries,
    secondaryFarads: 1 / (k * omega * omega * leakageHenries * square),
    coreLossOhms: coreSiemens > 0 ? 1 / coreSiemens : null,
    primaryFarads: TYPICAL_PRIMARY_FARADS,
  };
}

function refuse(readings: TransformerReadings): void {
  const faults: Fault[] = [];
  const positive = {
    ratio: readings.ratio,
    source: readings.sourceOhms,
    'low corner': readings.lowCornerHertz,
    resonance: readings.peakHertz,
  };
  for (const [where, value] of Object.entries(positive)) {
    if (value > 0 && Number.isFinite(value)) continue;
    faults.push({ code: 'reading-not-positive', where, got: String(value), expected: 'a value above 0' });
  }
  if (readings.midLossDecibels !== null && !(readings.midLossDecibels >= 0)) {
    faults.push({
      code: 'reading-not-positive',
      where: 'mid loss',
      got: `${readings.midLossDecibels} dB`,
      expected: 'a value of 0 or above: the primary stands below the open generator',
    });
  }
  if (!(readings.peakDecibels >= 0.1)) {
    faults.push({
      code: 'no-peak',
      where: 'height',
      got: `${readings.peakDecibels} dB`,
      expected: 'a peak of 0.1 dB or more over mid frequencies',
      hint: 'drive it from a lower resistance',
    });
  }
  if (faults.length > 0) throw new InputError(faults);
}
