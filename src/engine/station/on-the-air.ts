import { addBeatOscillator, type BeatOscillator } from './beat-oscillator.ts';
import type { Envelope } from './envelope.ts';
import { addNoise, addStatic, type Noise, type Static } from './noise.ts';
import { addOtherStation, type OtherStation, otherProgramme, sidebandHertz } from './other-station.ts';

/** What is on the air besides the wanted station, and the receiver's own oscillator. */
export interface OnTheAir {
  readonly secondStation: OtherStation | null;
  readonly noise: Noise | null;
  readonly statics: Static | null;
  readonly beatOscillator: BeatOscillator | null;
  /** Which noise and static: the same number gives the same. */
  readonly seed: number;
}

/** The second station's clip, mono. */
export interface OtherClip {
  readonly samples: Float64Array;
  readonly rateHertz: number;
}

/** Share of a sample rate, to each side of the carrier, that the renderer takes without loss. */
const CLEAN_SHARE = 0.375;

/** Whether anything disturbs the wanted station. */
export function disturbed({ secondStation, noise, statics }: OnTheAir): boolean {
  return secondStation !== null || noise !== null || statics !== null;
}

/** Times the clip's rate at which all of it fits: sidebands of a station 9 kHz off need more than a 22 kHz clip holds. */
export function airRateFactor({ secondStation, beatOscillator }: OnTheAir, clipRateHertz: number): number {
  const other = secondStation === null ? 0 : Math.abs(secondStation.offsetHertz) + sidebandHertz(secondStation);
  const reach = Math.max(other, Math.abs(beatOscillator?.pitchHertz ?? 0));
  return Math.max(1, Math.ceil(reach / (CLEAN_SHARE * clipRateHertz)));
}

/**
 * The envelope of the wanted station and what joins it.
 *
 * @param wanted     the wanted station's modulation, m·p(t), or its keying less 1
 * @param others     false: only what belongs to receiving it, the beat oscillator
 * @param otherClip  the second station's; null: a carrier alone
 * @param wantedVoltsRms  level of the wanted station's carrier, above 0
 */
export function airEnvelope(
  wanted: Float64Array,
  air: OnTheAir,
  others: boolean,
  otherClip: OtherClip | null,
  wantedVoltsRms: number,
  rateHertz: number,
): Envelope {
  const envelope = { modulation: wanted.slice(), quadrature: new Float64Array(wanted.length) };
  const { secondStation, noise, statics, beatOscillator, seed } = air;
  if (beatOscillator) addBeatOscillator(envelope, beatOscillator, wantedVoltsRms, rateHertz);
  if (!others) return envelope;
  if (secondStation) {
    const { samples, rateHertz: from } = otherClip ?? { samples: new Float64Array(0), rateHertz };
    const programme = otherProgramme(samples, from, secondStation, wanted.length, rateHertz);
    addOtherStation(envelope, secondStation, programme, wantedVoltsRms, rateHertz);
  }
  if (noise) addNoise(envelope, noise, wantedVoltsRms, rateHertz, seed);
  if (statics) addStatic(envelope, statics, wantedVoltsRms, rateHertz, seed);
  return envelope;
}
