import { analyse } from '../../src/engine/circuits/analysis.ts';
import { InputError } from '../../src/engine/errors.ts';
import { type RenderedClip, renderClip } from '../../src/engine/renderer/render-clip.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { TUBE_TYPES } from '../../src/engine/tubes/catalogue.ts';
import { quantityKinds } from '../../src/list/fields.ts';
import { CHANGEABLE } from '../../src/list/schema.ts';
import { type ListedVariant, listVariants, type Setting } from '../../src/list/variants.ts';
import { variantResult } from '../../src/results/variant-result.ts';
import { overDecades, seededNumbers } from './seeded-numbers.ts';

/** What became of one circuit. */
export interface Outcome {
  readonly words: string;
  readonly seconds: number;
  /** The sentence of a refusal; null where the circuit was worked out. */
  readonly refused: string | null;
  /** What is wrong with the answer; empty where nothing is. */
  readonly wrong: readonly string[];
  readonly unsettledSteps: number;
}

const KINDS = ['grid leak', 'grid leak', 'grid leak', 'plate bend', 'infinite impedance', 'diode', 'crystal'] as const;
const LOADS = ['resistor', 'choke', 'transformer', 'phones'] as const;
const OUTPUTS = [
  'next grid',
  'ceramic earpiece',
  'crystal earpiece',
  'phones',
  'low-impedance earpiece',
  'nothing',
] as const;

/** Keys that say nothing of a circuit, stand against each other, or go by other rules than a range. */
const KEPT_OUT =
  /^(on the air|tube|name|fault)|\.(turns|diameter|length|part|at current|inductance at current|capacitor|bias|heard through|battery capacity|side|pre-emphasis|channel limit)$/;
const STIFF_ONLY = 'tuned circuit.loaded Q';
const CRYSTAL_ONLY = /^detector\.(saturation current|ideality|series resistance)$/;
const COIL_ONLY = /^tuned circuit\.(coil|unloaded Q|tap|retune|antenna resistance)$/;

/** Settings of a circuit far from anything built: each key left alone, or at an end of its range, or anywhere in it. */
export function absurdSettings(seed: number): Setting[] {
  const next = seededNumbers(seed);
  // the first numbers of neighboring seeds are alike
  for (let n = 0; n < 8; n++) next();
  const pick = <T>(from: readonly T[]): T => from[Math.floor(next() * from.length)] as T;
  const settings: Setting[] = [];
  const put = (key: string, value: string | number): void => {
    settings.push({ key, value: String(value), where: '--set' });
  };
  const kind = pick(KINDS);
  const load = pick(LOADS);
  const stiff = next() < 0.3;
  put('detector.kind', kind);
  put('plate.load.kind', load);
  put('output.into', pick(OUTPUTS));
  put('detector.tube', pick(TUBE_TYPES).name);
  if (kind === 'grid leak') {
    put('detector.law', pick(['tube', 'tube', 'tube', 'square', 'linear']));
    put('detector.leak position', pick(['to cathode', 'across capacitor']));
  }
  if (kind === 'crystal') put('detector.diode', pick(['germanium', 'galena']));
  if (stiff) put(STIFF_ONLY, pick([1, 2000, overDecades(next(), 1, 2000)]));
  // how wild: from one key in a dozen to two in three
  const share = 0.08 + 0.6 * next() ** 2;
  for (const [key, field] of CHANGEABLE) {
    const known = quantityKinds.get(field);
    const tuned = key === STIFF_ONLY || (stiff && COIL_ONLY.test(key));
    if (!known || KEPT_OUT.test(key) || tuned || next() > share) continue;
    if (key.startsWith('plate.load.') && !ofLoad(load, key)) continue;
    if (key.startsWith('output.matching') && next() < 0.7) continue;
    if (kind === 'diode' && CRYSTAL_ONLY.test(key)) continue;
    if (kind === 'crystal' && key === 'detector.perveance') continue;
    // nearly any detuning would be more than half the carrier
    if (key === 'tuned circuit.detune' && next() < 0.8) {
      put(key, pick([-15e3, -1, 3e3, 14e3]));
      continue;
    }
    if (key === 'detector.leak' && kind !== 'grid leak') continue;
    const { limits } = known;
    const most = limits.atMost as number;
    const least = 'atLeast' in limits ? (limits.atLeast as number) : most * 1e-12;
    const low = least > 0 ? least : most * 1e-9;
    const where = next();
    if (limits.orZero && where < 0.15) put(key, 0);
    else if (where < 0.35) put(key, least);
    else if (where < 0.6) put(key, most);
    else put(key, overDecades(next(), low, most));
  }
  return settings;
}

/** Which values each kind of load has. */
const LOAD_VALUES = {
  resistor: ['resistance'],
  choke: ['inductance', 'dc resistance', 'core loss', 'self capacitance'],
  transformer: ['ratio', 'primary', 'secondary', 'leakage', 'core loss'],
  phones: ['dc resistance', 'inductance', 'eddy loss', 'self capacitance', 'resona'],
} as const;
function ofLoad(load: keyof typeof LOAD_VALUES, key: string): boolean {
  const last = key.slice('plate.load.'.length);
  return LOAD_VALUES[load].some((begin) => last.startsWith(begin));
}

/** Works one circuit out on paper and for some sound, and judges the answer. Throws what is no InputError. */
export function workedOut(seed: number, soundSeconds = 1): Outcome {
  const settings = absurdSettings(seed);
  const words = settings.map(({ key, value }) => `${key}=${value}`).join('; ');
  const begun = process.cpuUsage().user;
  const seconds = (): number => (process.cpuUsage().user - begun) / 1e6;
  let unsettledSteps = 0;
  try {
    const [variant] = listVariants('', 'set.yaml', settings) as [ListedVariant];
    const analysis = analyse(variant.circuit, variant.ratings);
    const wrong: string[] = notFinite(variantResult(variant.name, variant.changes, analysis, {}));
    const rate = seed % 2 === 0 ? 8000 : 48_000;
    const depth = variant.circuit.station.modulation;
    const programme = hardProgramme(rate, depth).subarray(0, soundSeconds * rate);
    const laws = new TableStore().lawsFor(analysis.rest, depth);
    const clip = renderClip(analysis.rest, laws, programme, rate);
    unsettledSteps = clip.unsettledSteps;
    wrong.push(...soundFaults(clip, variant));
    return { words, seconds: seconds(), refused: null, wrong, unsettledSteps };
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return { words, seconds: seconds(), refused: error.message, wrong: [], unsettledSteps };
  }
}

/** A second that begins hard: tones from the lowest to the highest, full depth, and silence at the end. */
function hardProgramme(rate: number, depth: number): Float64Array {
  return Float64Array.from({ length: rate }, (_, n) => {
    const t = n / rate;
    if (t > 0.8) return 0;
    const tone = Math.sin(2 * Math.PI * (20 * t + 2000 * t ** 3));
    return Math.max(-1, depth * (t < 0.1 ? Math.sign(Math.sin(2 * Math.PI * 100 * t)) : tone));
  });
}

/** Places in a result whose numbers no file can hold. */
function notFinite(value: unknown, path = 'result'): string[] {
  if (typeof value === 'number') return Number.isFinite(value) ? [] : [`${path} is ${value}`];
  if (typeof value === 'string') return /NaN|Infinity|undefined/.test(value) ? [`${path} says ${value}`] : [];
  if (typeof value !== 'object' || value === null) return [];
  return Object.entries(value).flatMap(([key, inner]) => notFinite(inner, `${path}.${key}`));
}

function soundFaults(clip: RenderedClip, { circuit }: ListedVariant): string[] {
  const bad = clip.volts.findIndex((volts) => !Number.isFinite(volts));
  if (bad >= 0) return [`sample ${bad} is ${clip.volts[bad]}`];
  const most = mostVolts(circuit);
  return clip.peakVolts > most ? [`${clip.peakVolts} V of sound where ${most} V can be`] : [];
}

/**
 * More than any output can be: what supply and carrier at its deepest modulation hold, stepped up by every winding.
 * A winding that resonates gives several times the voltage put across it; a factor of 30 leaves room for its Q.
 */
function mostVolts({ station, tunedCircuit, detector, tube, plate, output }: ListedVariant['circuit']): number {
  const crest = Math.SQRT2 * station.levelVoltsRms * (1 + station.modulation);
  const carrier = crest * (tunedCircuit.kind === 'coil' ? tunedCircuit.unloadedQ + 1 : 1);
  const ratio = plate.load.kind === 'transformer' ? Math.max(1, plate.load.ratio) : 1;
  // a textbook's plate is straight without end, and gives its gain of whatever the grid rectifies
  const gain = detector.law === 'tube' ? 1 : 1 + tube.law.mu;
  return 30 * (plate.supplyVolts + gain * carrier + 1) * ratio * Math.max(1, output.matching?.ratio ?? 1);
}
