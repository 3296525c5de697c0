import { expect } from 'vitest';
import { restCautions } from '../../src/engine/circuits/cautions.ts';
import type {
  CoilCircuit,
  DetectorCircuit,
  GridLeakDetector,
  TunedCircuit,
} from '../../src/engine/circuits/circuit.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { harmonics } from '../../src/engine/measure/harmonics.ts';
import { runReference } from '../../src/engine/reference/run-reference.ts';
import type { ReferenceSource } from '../../src/engine/reference/source-drive.ts';
import type { Quality } from '../../src/engine/renderer/detector-renderer.ts';
import { renderClip } from '../../src/engine/renderer/render-clip.ts';
import type { TableStore } from '../../src/engine/renderer/table-store.ts';
import { SOCKET_STRAYS, tubeFromCatalogue } from '../../src/engine/tubes/socketed-tube.ts';

/** One circuit and one tone, as renderer and reference are both given them. */
export interface ToneCase {
  readonly tube: string;
  readonly supplyVolts: number;
  readonly plateOhms: number;
  readonly bypassFarads: number;
  readonly gridCapacitorFarads: number;
  readonly leakOhms: number;
  readonly leakPosition: GridLeakDetector['leakPosition'];
  readonly leakReturnVolts: number;
  readonly capacitorLeakageOhms: number | null;
  readonly carrierHertz: number;
  readonly levelVoltsRms: number;
  readonly tunedCircuit: TunedCircuit;
  readonly couplingFarads: number;
  readonly loadOhms: number;
  readonly loadFarads: number;
  readonly toneHertz: number;
  readonly depth: number;
}

/** A 6SN7-GT at 90 V and 47 kΩ, half a volt at 1 MHz, values in the middle of what builders use. */
export const MIDDLE: ToneCase = {
  tube: '6SN7-GT',
  supplyVolts: 90,
  plateOhms: 47e3,
  bypassFarads: 250e-12,
  gridCapacitorFarads: 150e-12,
  leakOhms: 1e6,
  leakPosition: 'to cathode',
  leakReturnVolts: 0,
  capacitorLeakageOhms: null,
  carrierHertz: 1e6,
  levelVoltsRms: 0.5,
  tunedCircuit: { kind: 'stiff', loadedQ: 40, detuneHertz: 0 },
  couplingFarads: 1e-9,
  loadOhms: 470e3,
  loadFarads: 30e-12,
  toneHertz: 1000,
  depth: 0.8,
};

/** A coil as built that tunes from 530 kHz to 1.6 MHz with 49 to 450 pF. */
export const COIL: CoilCircuit = {
  kind: 'coil',
  coilHenries: 200e-6,
  unloadedQ: 100,
  tap: 1,
  retuned: true,
  detuneHertz: 0,
};

/** The carrier is brought to a whole multiple of the tone, as the reference needs it. */
export function circuitOf(c: ToneCase): DetectorCircuit {
  const { tube } = tubeFromCatalogue(c.tube, { supplyVolts: c.supplyVolts, strays: SOCKET_STRAYS });
  return {
    station: {
      carrierHertz: Math.round(c.carrierHertz / c.toneHertz) * c.toneHertz,
      levelVoltsRms: c.levelVoltsRms,
      modulation: c.depth,
    },
    tunedCircuit: c.tunedCircuit,
    detector: {
      kind: 'grid leak',
      law: 'tube',
      gridCapacitorFarads: c.gridCapacitorFarads,
      leakOhms: c.leakOhms,
      leakPosition: c.leakPosition,
      leakReturnVolts: c.leakReturnVolts,
      capacitorLeakageOhms: c.capacitorLeakageOhms,
      chargeOhms: null,
    },
    tube,
    plate: { supplyVolts: c.supplyVolts, bypassFarads: c.bypassFarads, load: { kind: 'resistor', ohms: c.plateOhms } },
    output: { couplingFarads: c.couplingFarads, loadOhms: c.loadOhms, loadFarads: c.loadFarads },
  };
}

/** What the two gave, and how far the renderer may be off. */
export interface TonePair {
  /** Rendered fundamental over the reference's, dB. */
  readonly decibels: number;
  /** Second harmonic re the fundamental, of the reference. */
  readonly second: number;
  /** Rendered less reference, re the fundamental. */
  readonly secondError: number;
  readonly allowedDecibels: number;
  readonly allowedSecond: number;
  /** Codes of the cautions that call the averaging doubtful here: the limits are then not promised. */
  readonly doubts: readonly string[];
  readonly unsettledSteps: number;
}

/** Clip rate at which 10 kHz and its second harmonic lie in the pass band of the resampling. */
const RATE_HERTZ = 96_000;

/** Six time constants of the slower of grid leak and coupling capacitor. */
function settlingSeconds(c: ToneCase): number {
  return 6 * Math.max(c.leakOhms * c.gridCapacitorFarads, c.couplingFarads * (c.loadOhms + c.plateOhms));
}

export interface PairOptions {
  /** Left out, rounded up to whole periods and to one at least. */
  readonly settleSeconds?: number;
  /** Of the reference; 96 unless given. */
  readonly stepsPerCycle?: number;
  readonly quality?: Quality;
}

/** One tone through renderer and reference, the same start, the same window. */
export function tonePair(c: ToneCase, tables: TableStore, options: PairOptions = {}): TonePair {
  const { settleSeconds = settlingSeconds(c), stepsPerCycle = 96, quality = 'normal' } = options;
  const circuit = circuitOf(c);
  const rest = restPoint(circuit);
  const common = commonDivisor(c.toneHertz, RATE_HERTZ);
  const periods = c.toneHertz / common;
  const skipped = Math.max(1, Math.ceil(settleSeconds * c.toneHertz - 1e-9));
  // The renderer's window begins on a clip sample: whole stretches of `periods` are skipped.
  const settlePeriods = Math.ceil(skipped / periods) * periods;
  const clip = Math.round((settlePeriods / c.toneHertz) * RATE_HERTZ);
  const window = Math.round((periods / c.toneHertz) * RATE_HERTZ);
  const turn = (2 * Math.PI * c.toneHertz) / RATE_HERTZ;
  // The clip goes on past the window, so that its end does not ring into it.
  const modulation = Float64Array.from({ length: clip + window + 200 }, (_, n) => c.depth * Math.sin(turn * n));
  const rendered = renderClip(rest, tables.lawsFor(rest, c.depth), modulation, RATE_HERTZ, quality);
  const ours = harmonics(rendered.volts.subarray(clip, clip + window), periods, 3).amplitudes;
  const run = runReference(
    circuit,
    { audioHertz: c.toneHertz, modulation: c.depth, source: sourceOf(circuit, rest.tuned.input.im) },
    { settleSeconds: settlePeriods / c.toneHertz, periods, stepsPerCycle },
  );
  const { peaks } = run.output;
  const second = peaks[2]! / peaks[1]!;
  const bypass = c.bypassFarads + circuit.tube.plateCathodeFarads;
  const atGrid = rest.tuned.carrierPeakVolts / Math.SQRT2;
  // The limits the renderer is built to; a small second harmonic is judged against the fundamental.
  const loose = bypass < 50e-12 && atGrid > 0.1;
  return {
    decibels: 20 * Math.log10(ours[1]! / peaks[1]!),
    second,
    secondError: ours[2]! / ours[1]! - second,
    allowedDecibels: loose ? 0.3 : 0.1,
    allowedSecond: loose ? 0.1 * Math.max(second, 0.005) : second >= 0.005 ? 0.03 * second : 2e-4,
    doubts: restCautions(rest, null)
      .map((caution) => caution.code)
      .filter((code) => code === 'ripple' || code === 'plate-harmonic'),
    unsettledSteps: rendered.unsettledSteps,
  };
}

/**
 * The source as the reference wants it stated. A dial that is set again stands where it cancels the susceptance of the
 * averaged rest point: were that wrong, the reference's tank would be out of tune and the tone would show it.
 */
export function sourceOf(circuit: DetectorCircuit, inputSusceptance: number): ReferenceSource {
  const { tunedCircuit, station } = circuit;
  if (tunedCircuit.kind === 'stiff') return { ...tunedCircuit, levelVoltsRms: station.levelVoltsRms };
  const omega = 2 * Math.PI * station.carrierHertz;
  const resonance = omega - 2 * Math.PI * tunedCircuit.detuneHertz;
  const open = 1 / (resonance * resonance * tunedCircuit.coilHenries);
  const cancelled = tunedCircuit.retuned ? (tunedCircuit.tap ** 2 * inputSusceptance) / omega : 0;
  return { kind: 'coil', tankFarads: open - cancelled, openTankFarads: open };
}

function commonDivisor(a: number, b: number): number {
  return b === 0 ? a : commonDivisor(b, a % b);
}

/** Highest harmonic that the resampling passes flat, Hz: above it the clip's filters are judged, not the circuit. */
const PASS_BAND_HERTZ = 16_000;

/** Holds a pair to the limits, where they are promised. */
export function expectWithinLimits(c: ToneCase, pair: TonePair): void {
  expect(pair.doubts, 'cautions that call the averaging doubtful').toEqual([]);
  expect(pair.unsettledSteps).toBe(0);
  expect(Math.abs(pair.decibels), `fundamental, dB off; limit ${pair.allowedDecibels}`).toBeLessThan(
    pair.allowedDecibels,
  );
  if (2 * c.toneHertz > PASS_BAND_HERTZ) return;
  expect(Math.abs(pair.secondError), `second harmonic, off; it is ${pair.second}`).toBeLessThan(pair.allowedSecond);
}
