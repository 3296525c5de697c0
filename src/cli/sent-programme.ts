import { carrierOfClip, keyedCarrier } from '../engine/station/morse.ts';
import { preEmphasise } from '../engine/station/pre-emphasis.ts';
import { type Programme, programmeFrom } from '../engine/station/programme.ts';
import type { ReadSound } from '../results/wav-read.ts';
import type { RunVariant } from './list-input.ts';

/** Sample rate of a Morse text where there is no clip to give one, Hz. */
export const TEXT_RATE_HERTZ = 48_000;

/** What a variant's station sends. */
export interface SentProgramme extends Programme {
  /** Modulation before and after: 0 a carrier, −1 the key up. */
  readonly before: number;
}

/**
 * The clip as this variant's station sends it, or its text in Morse; variants with the same station share one.
 *
 * @param clip  null only where the variant sends a text
 */
export function sentProgramme(
  variant: RunVariant,
  clip: ReadSound | null,
  kept: Map<string, SentProgramme>,
): SentProgramme {
  const { preEmphasis, channelLimit, side } = variant.sending;
  const depth = variant.circuit.station.modulation;
  const keying = variant.onTheAir?.keying ?? null;
  const key = JSON.stringify([preEmphasis, channelLimit, side, depth, keying]);
  const found = kept.get(key);
  if (found) return found;
  const rateHertz = clip?.sampleRateHertz ?? TEXT_RATE_HERTZ;
  const mono = (): Float64Array => clip?.mono(side) ?? new Float64Array(0);
  const made =
    keying === null
      ? { ...sent(preEmphasise(mono(), rateHertz, preEmphasis, channelLimit), depth), before: 0 }
      : keyed(keying === 'clip' ? carrierOfClip(mono()) : keyedCarrier(keying, rateHertz, 'on the air.morse'));
  kept.set(key, made);
  return made;
}

/** The samples are this run's own: they become the modulation. */
function sent(samples: Float64Array, depth: number): Programme {
  return programmeFrom(samples, depth, samples);
}

function keyed(carrier: Float64Array): SentProgramme {
  return { modulation: carrier.map((value) => value - 1), limitedSamples: 0, before: -1 };
}
