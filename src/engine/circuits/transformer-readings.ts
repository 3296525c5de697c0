import { type Fault, InputError } from '../errors.ts';

/** What is read of a transformer on the bench, driven from a generator with a known resistance in series. */
export interface TransformerReadings {
  /** Secondary volts a primary volt at mid frequencies. */
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
  /** From the meter, ohms. */
  readonly primaryDcOhms: number;
  readonly secondaryDcOhms: number;
}

/** The values that explain the readings. */
export interface ReadTransformer {
  readonly primaryHenries: number;
  readonly leakageHenries: number;
  readonly secondaryFarads: number;
}

/**
 * Transformer values from bench readings.
 *
 * Below mid frequencies the primary inductance stands across the source's and the load's resistances in parallel, so at
 * the corner its reactance is that. Above, leakage and the capacitance on the primary side are a low-pass of second
 * order between source and load: peak frequency and height give its resonance and Q, and these the two values. The
 * primary's own capacitance counts with the secondary's.
 *
 * @throws InputError `reading-not-positive`, `no-peak` (a peak below 0.1 dB tells nothing), `damped-away`
 */
export function transformerFromReadings(readings: TransformerReadings): ReadTransformer {
  refuse(readings);
  const { ratio } = readings;
  const square = ratio * ratio;
  const series = readings.sourceOhms + readings.primaryDcOhms;
  const load =
    readings.loadOhms === null ? Number.POSITIVE_INFINITY : (readings.loadOhms + readings.secondaryDcOhms) / square;
  const low = 1 / (1 / series + 1 / load);
  const primaryHenries = low / (2 * Math.PI * readings.lowCornerHertz);

  const height = 10 ** (readings.peakDecibels / 20);
  // peak of Q/√(1 − 1/4Q²): with q = Q², height² = q²/(q − 1/4)
  const q = (height * height + height * Math.sqrt(height * height - 1)) / 2;
  const omega = (2 * Math.PI * readings.peakHertz) / Math.sqrt(1 - 1 / (2 * q));
  const Q = Math.sqrt(q);
  const total = series + readings.secondaryDcOhms / square;
  const k = 1 / (1 + total / load);
  // L·C = 1/(k·ω²) and L/R_load + R·C = 1/(k·Q·ω): the smaller root is the source-damped one
  const b = 1 / (k * Q * omega);
  const c = total / (k * omega * omega);
  const root = b * b - (4 * c) / load;
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
  const primarySideFarads = 1 / (k * omega * omega * leakageHenries);
  return {
    primaryHenries,
    leakageHenries,
    secondaryFarads: Math.max(primarySideFarads / square - readings.meterFarads, 0),
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
