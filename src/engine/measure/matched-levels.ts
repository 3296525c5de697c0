/** Level that the loudest peak of a set is brought to, dB re full scale: room for players that resample. */
export const PEAK_DECIBELS = -1;

/** A sound of a set, as gains are found for it. */
export interface LevelledSound {
  /** Largest magnitude re full scale, 0 and up. */
  readonly peak: number;
  /** LUFS; null when too quiet or too short to measure. */
  readonly loudnessLufs: number | null;
}

/**
 * Gains, dB, that give all sounds of a set the same loudness with no peak over −1 dB: the common loudness is what the
 * sound with least room to grow can reach. A silent sound keeps gain 0.
 */
export function matchedGains(sounds: readonly LevelledSound[]): number[] {
  let common = Number.POSITIVE_INFINITY;
  for (const { peak, loudnessLufs } of sounds) {
    if (loudnessLufs === null || !(peak > 0)) continue;
    common = Math.min(common, loudnessLufs + PEAK_DECIBELS - 20 * Math.log10(peak));
  }
  return sounds.map(({ loudnessLufs }) =>
    loudnessLufs !== null && Number.isFinite(common) ? common - loudnessLufs : 0,
  );
}

/** One gain, dB, 0 or less, that brings the loudest peak of a set down to −1 dB and keeps their level differences. */
export function setGain(sounds: readonly LevelledSound[]): number {
  const peak = sounds.reduce((most, sound) => Math.max(most, sound.peak), 0);
  return peak > 0 ? Math.min(0, PEAK_DECIBELS - 20 * Math.log10(peak)) : 0;
}
