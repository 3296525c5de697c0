import type { DetectorCircuit } from '../../engine/circuits/circuit.ts';
import { magnitude } from '../../engine/circuits/complex.ts';
import { corners, LinearResponse, REFERENCE_HERTZ } from '../../engine/circuits/response.ts';
import { restPoint } from '../../engine/circuits/rest-point.ts';
import { integratedLoudness } from '../../engine/measure/loudness.ts';
import { formatQuantity, type QuantityKind } from '../../engine/parts/format-quantity.ts';
import { stepPreferred } from '../../engine/parts/preferred-values.ts';
import { renderClipInTurns } from '../../engine/renderer/render-clip.ts';
import { TableStore } from '../../engine/renderer/table-store.ts';
import { circuitOfLayers, type PlainKeys } from '../../list/plain-layers.ts';
import type { LiveDetector } from './live-player.ts';

/** A part that arrows step, where the circuit has it. */
export interface LivePart {
  readonly key: string;
  readonly name: string;
  readonly kind: QuantityKind;
  readonly value: (circuit: DetectorCircuit) => number | null;
}

/** Parts that are stepped, in the order the arrows go through them. */
export const LIVE_PARTS: readonly LivePart[] = [
  { key: 'plate.bypass', name: 'bypass', kind: 'capacitance', value: ({ plate }) => plate.bypassFarads },
  {
    key: 'detector.leak',
    name: 'leak',
    kind: 'resistance',
    value: ({ detector }) => (detector.kind === 'grid leak' ? detector.leakOhms : null),
  },
  {
    key: 'detector.grid capacitor',
    name: 'grid capacitor',
    kind: 'capacitance',
    value: ({ detector }) => (detector.kind === 'grid leak' ? detector.gridCapacitorFarads : null),
  },
  {
    key: 'plate.load.resistance',
    name: 'load',
    kind: 'resistance',
    value: ({ plate }) => (plate.load.kind === 'resistor' ? plate.load.ohms : null),
  },
  { key: 'output.coupling', name: 'coupling', kind: 'capacitance', value: ({ output }) => output.couplingFarads },
];

/** What one variant sounds like and says of itself. */
export interface LiveVariant {
  readonly name: string;
  readonly layers: readonly PlainKeys[];
  readonly circuit: DetectorCircuit;
  readonly detector: LiveDetector;
  readonly highCornerHertz: number | null;
  /** Audio at 400 Hz and 30 % modulation, V rms. */
  readonly audioVolts: number;
  readonly peakVolts: number;
  readonly loudnessLufs: number | null;
}

/** Longest stretch of the clip from which peak and loudness are taken, s. */
const MEASURED_SECONDS = 30;
/** Smallest step from no bypass at all, F. */
const FIRST_FARADS = 10e-12;
const TEST_MODULATION = 0.3;

/** Makes variants ready to be heard: at rest, with their tables, their peak and loudness measured. */
export class LiveSet {
  private readonly tables = new TableStore();
  private readonly rateHertz: number;
  private readonly breathe: () => Promise<void>;

  /** @param breathe  awaited between pieces of work, so that sound goes on meanwhile */
  constructor(rateHertz: number, breathe: () => Promise<void>) {
    this.rateHertz = rateHertz;
    this.breathe = breathe;
  }

  /** Throws InputError as the rest point does. */
  async ready(
    name: string,
    layers: readonly PlainKeys[],
    circuit: DetectorCircuit,
    modulation: Float64Array,
  ): Promise<LiveVariant> {
    const rest = restPoint(circuit);
    const response = new LinearResponse(rest);
    const audio = magnitude(response.at(REFERENCE_HERTZ).output);
    await this.breathe();
    const laws = this.tables.lawsFor(rest, 1);
    await this.breathe();
    const stretch = modulation.subarray(0, MEASURED_SECONDS * this.rateHertz);
    const { volts, peakVolts } = await renderClipInTurns(rest, laws, stretch, this.rateHertz, 'normal', this.breathe);
    return {
      name,
      layers,
      circuit,
      detector: { rest, laws, modulation, gain: 1 },
      highCornerHertz: corners(response).highHertz,
      audioVolts: (audio * TEST_MODULATION) / Math.SQRT2,
      peakVolts,
      loudnessLufs: integratedLoudness([volts], this.rateHertz),
    };
  }

  /** The variant with one part a preferred value further; null where the part ends or is not there. */
  async stepped(from: LiveVariant, part: LivePart, by: 1 | -1): Promise<LiveVariant | null> {
    const value = part.value(from.circuit);
    if (value === null) return null;
    const next = value > 0 ? stepPreferred(value, by, 'E12') : by > 0 ? FIRST_FARADS : 0;
    // below the smallest capacitor that is sold there is none
    const written = part.kind === 'capacitance' && next < FIRST_FARADS ? '0' : formatQuantity(next, part.kind);
    if (written === '0' && part.key !== 'plate.bypass') return null;
    const layers = [...from.layers, { [part.key]: written }];
    const { circuit } = circuitOfLayers(layers);
    const name = from.name.startsWith('bench: ') ? from.name : `bench: ${from.name}`;
    return this.ready(name, layers, circuit, from.detector.modulation);
  }
}

/** Gain of a variant for the true level against the loudest of a set, or for the loudness of the quietest that has room. */
export function liveGain(variant: LiveVariant, set: readonly LiveVariant[], match: 'level' | 'loudness'): number {
  const full = Math.max(...set.map((one) => one.peakVolts), variant.peakVolts, 1e-12) * 10 ** (1 / 20);
  if (match === 'level' || variant.loudnessLufs === null) return 1 / full;
  // loudness that every variant reaches with its own peak at full scale
  const reached = [...set, variant].flatMap((one) =>
    one.loudnessLufs === null || !(one.peakVolts > 0) ? [] : [one.loudnessLufs - 20 * Math.log10(one.peakVolts) - 1],
  );
  return 10 ** ((Math.min(...reached) - variant.loudnessLufs) / 20);
}

/** One line that says what is heard. */
export function statusLine(
  variant: LiveVariant,
  index: number,
  part: LivePart,
  match: 'level' | 'loudness',
  loudest: number,
  seconds: number,
  paused: boolean,
): string {
  const value = part.value(variant.circuit);
  const level = 20 * Math.log10(variant.audioVolts / loudest);
  const corner = variant.highCornerHertz;
  return [
    `${index < 0 ? '*' : index + 1} ${variant.name}`,
    `[${part.name} ${value === null ? 'absent' : formatQuantity(value, part.kind)}]`,
    `corner ${corner === null ? 'above 16 kHz' : formatQuantity(corner, 'frequency', 3)}`,
    `audio ${formatQuantity(variant.audioVolts, 'voltage', 3)} (${level >= 0 ? '+' : ''}${level.toFixed(1)} dB)`,
    match === 'level' ? 'true level' : 'matched loudness',
    `${paused ? 'paused ' : ''}${Math.floor(seconds / 60)}:${String(Math.floor(seconds % 60)).padStart(2, '0')}`,
  ].join('  ');
}
