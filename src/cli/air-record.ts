import { rootMeanSquare, steadyToneRms, takenApart } from '../engine/measure/apart.ts';
import { keyedTone } from '../engine/measure/keyed-tone.ts';
import type { AirRender } from '../engine/renderer/render-on-air.ts';
import type { ListedAir } from '../list/list-air.ts';
import type { OnTheAirRecord } from '../results/air-record.ts';

/** Frequencies up to this share of the rate are measured in a clip. */
const MEASURED_SHARE = 0.45;

/**
 * How well the wanted station is heard. Wanted and unwanted audio are told apart by projecting the output on what the
 * wanted station gives alone (with the beat oscillator, which belongs to receiving it): the projection is the wanted
 * part, all else unwanted, whistle and products of the two included.
 */
export function airRecord(listed: ListedAir, { clip, aloneVolts }: AirRender, rateHertz: number): OnTheAirRecord {
  const { air, otherClip, keying } = listed;
  const alone = aloneVolts ?? clip.volts;
  const { wantedVoltsRms, restVoltsRms, rest } = takenApart(clip.volts, alone);
  const unwantedVoltsRms = aloneVolts === null ? 0 : restVoltsRms;
  const { secondStation, beatOscillator } = air;
  return {
    secondStation: secondStation && { clip: otherClip, ...secondStation },
    noise: air.noise,
    statics: air.statics,
    beatOscillator,
    seed: air.seed,
    morse: keying,
    wantedAloneVoltsRms: rootMeanSquare(alone),
    wantedVoltsRms,
    unwantedVoltsRms,
    wantedOverUnwantedDecibels: decibels(wantedVoltsRms, unwantedVoltsRms),
    whistle: secondStation && whistleOf(Math.abs(secondStation.offsetHertz), rest, wantedVoltsRms, rateHertz),
    tone:
      keying !== null && beatOscillator !== null && beatOscillator.pitchHertz < rateHertz / 4
        ? { hertz: beatOscillator.pitchHertz, ...keyedTone(alone, beatOscillator.pitchHertz, rateHertz) }
        : null,
  };
}

function whistleOf(
  hertz: number,
  rest: Float64Array,
  wantedVoltsRms: number,
  rateHertz: number,
): OnTheAirRecord['whistle'] {
  if (!(hertz > 0 && hertz < MEASURED_SHARE * rateHertz)) return null;
  const voltsRms = steadyToneRms(rest, hertz, rateHertz);
  return { hertz, voltsRms, decibels: decibels(voltsRms, wantedVoltsRms) };
}

function decibels(volts: number, over: number): number | null {
  return volts > 0 && over > 0 ? 20 * Math.log10(volts / over) : null;
}
