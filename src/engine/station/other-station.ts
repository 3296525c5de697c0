import type { Envelope } from './envelope.ts';
import { type Band, narrower, resampled, sharedBand } from './resampled.ts';

/** A station on another frequency. */
export interface OtherStation {
  /** Its carrier less the wanted station's, Hz. */
  readonly offsetHertz: number;
  /** Its unmodulated carrier, V rms, where the wanted station's level is counted. */
  readonly levelVoltsRms: number;
  /** Depth at the largest peak of its clip, 0 to 1. */
  readonly modulation: number;
  readonly channelLimit: 'none' | '9 kHz';
}

/** Audio of a station in a crowded 9 kHz channel, and of one with a channel to spare; ours, no standard. */
const CHANNEL: Band = { passHertz: 4200, stopHertz: 4800 };
const WIDE: Band = { passHertz: 9500, stopHertz: 10_500 };

/** Sidebands reach as far as this from its carrier, Hz. */
export function sidebandHertz(station: OtherStation): number {
  return (station.channelLimit === '9 kHz' ? CHANNEL : WIDE).stopHertz;
}

/**
 * Its programme at the rate of the wanted clip: limited to its own audio band, brought to its depth, and begun again
 * from the start as often as it takes, since a station does not fall silent when a clip ends.
 *
 * @param clip      its samples, mono; empty: a carrier alone
 * @param fromHertz the clip's own rate
 * @param frames, rateHertz  what is wanted
 */
export function otherProgramme(
  clip: Float64Array,
  fromHertz: number,
  station: OtherStation,
  frames: number,
  rateHertz: number,
): Float64Array {
  const programme = new Float64Array(frames);
  if (clip.length === 0) return programme;
  const limit = station.channelLimit === '9 kHz' ? CHANNEL : WIDE;
  const once = resampled(clip, fromHertz, rateHertz, narrower(limit, sharedBand(fromHertz, rateHertz)));
  let largest = 0;
  for (const value of once) largest = Math.max(largest, Math.abs(value));
  const gain = largest > 0 ? station.modulation / largest : 0;
  for (let n = 0; n < frames && once.length > 0; n++) programme[n] = gain * (once[n % once.length] as number);
  return programme;
}

/**
 * Adds the station to what is on the air: r·(1 + m·p(t)) turning at the offset, r its level over the wanted one's.
 *
 * @param programme  m·p, as long as the envelope
 */
export function addOtherStation(
  envelope: Envelope,
  station: OtherStation,
  programme: Float64Array,
  wantedVoltsRms: number,
  rateHertz: number,
): void {
  const { modulation, quadrature } = envelope;
  const ratio = station.levelVoltsRms / wantedVoltsRms;
  for (let n = 0; n < modulation.length; n++) {
    // whole turns taken off first, so that a long clip loses no accuracy
    const angle = 2 * Math.PI * (((station.offsetHertz * n) / rateHertz) % 1);
    const size = ratio * (1 + (programme[n] as number));
    modulation[n] = (modulation[n] as number) + size * Math.cos(angle);
    quadrature[n] = (quadrature[n] as number) + size * Math.sin(angle);
  }
}
