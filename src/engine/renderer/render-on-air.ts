import type { RestPoint } from '../circuits/rest-point.ts';
import { largestExcess } from '../station/envelope.ts';
import { airEnvelope, airRateFactor, disturbed, type OnTheAir, type OtherClip } from '../station/on-the-air.ts';
import { resampled } from '../station/resampled.ts';
import type { Quality } from './detector-renderer.ts';
import { type RenderedClip, renderClipInTurns } from './render-clip.ts';
import type { TableStore } from './table-store.ts';

/** A clip received with all that is on the air. */
export interface AirRender {
  readonly clip: RenderedClip;
  /** Output volts with nothing to disturb the wanted station; null where nothing does. */
  readonly aloneVolts: Float64Array | null;
}

/** A detector starts at rest, and the others would come as a thump: it hears them before the clip begins, s. */
const LEAD_SECONDS = 0.4;
/** Clip samples after the end, so that its last ones have what the filters look ahead to. */
const TAIL_FRAMES = 128;
/** Between samples an envelope of noise may stand higher than at any of them. */
const BETWEEN_SAMPLES = 1.2;

export interface AirRequest {
  readonly air: OnTheAir;
  readonly otherClip: OtherClip | null;
  /** m·p(t) of the wanted station, or its keying less 1. */
  readonly modulation: Float64Array;
  /** The wanted station before the clip begins: 0 a carrier, −1 the key up. */
  readonly before: number;
  readonly clipRateHertz: number;
  readonly quality: Quality;
  /** How long the detector hears the others before the clip begins, s; left out: 0.4, for the slowest supplies and transformers. */
  readonly leadSeconds?: number;
}

/**
 * Renders a clip with what is on the air besides, and once more without where there is something to disturb it, so that
 * the two can be told apart. A steady voltage of the output is taken off: it cannot be heard.
 *
 * @param onShare  told how much is done, 0 to 1, and awaited; may throw to stop
 */
export async function renderOnAir(
  rest: RestPoint,
  tables: TableStore,
  request: AirRequest,
  onShare: (share: number) => void | Promise<void> = () => {},
): Promise<AirRender> {
  const { air, otherClip, modulation, before, clipRateHertz, quality } = request;
  const factor = airRateFactor(air, clipRateHertz);
  const rateHertz = factor * clipRateHertz;
  const lead = Math.round((request.leadSeconds ?? LEAD_SECONDS) * clipRateHertz);
  const wanted = new Float64Array(lead + modulation.length + TAIL_FRAMES).fill(before);
  wanted.set(modulation, lead);
  const raised = factor === 1 ? wanted : resampled(wanted, clipRateHertz, rateHertz);
  const runs = disturbed(air) ? 2 : 1;
  const received = async (run: number): Promise<RenderedClip> => {
    const { levelVoltsRms } = rest.circuit.station;
    const envelope = airEnvelope(raised, air, run === 0, otherClip, levelVoltsRms, rateHertz);
    const laws = tables.lawsFor(rest, BETWEEN_SAMPLES * (1 + largestExcess(envelope)) - 1);
    const tell = (done: number): void | Promise<void> => onShare((run + done / raised.length) / runs);
    const whole = await renderClipInTurns(
      rest,
      laws,
      envelope.modulation,
      rateHertz,
      quality,
      tell,
      envelope.quadrature,
    );
    const atClip = factor === 1 ? whole.volts : resampled(whole.volts, rateHertz, clipRateHertz);
    const volts = withoutMean(atClip.slice(lead, lead + modulation.length));
    return { ...whole, volts, peakVolts: largestSize(volts) };
  };
  const clip = await received(0);
  return { clip, aloneVolts: runs === 2 ? (await received(1)).volts : null };
}

function withoutMean(volts: Float64Array): Float64Array {
  const mean = volts.reduce((sum, value) => sum + value, 0) / Math.max(volts.length, 1);
  return volts.map((value) => value - mean);
}

function largestSize(volts: Float64Array): number {
  let most = 0;
  for (const value of volts) most = Math.max(most, Math.abs(value));
  return most;
}
