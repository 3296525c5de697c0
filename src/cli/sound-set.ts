import { integratedLoudness } from '../engine/measure/loudness.ts';
import { matchedGains, PEAK_DECIBELS } from '../engine/measure/matched-levels.ts';
import type { RenderedClip } from '../engine/renderer/render-clip.ts';

/** How a set of rendered variants is put into files. */
export interface SoundLevels {
  /** Volts that stand at full scale, before each variant's gain. */
  readonly fullScaleVolts: number;
  /** Per variant: gain (dB), loudness of the file (LUFS, null when too quiet to measure), samples. */
  readonly sounds: readonly { gainDecibels: number; loudnessLufs: number | null; samples: Float64Array }[];
}

/**
 * One full scale for all variants, so that their level differences are kept (`level`), or gains that give all the
 * same loudness by ITU-R BS.1770 with no peak over −1 dB (`loudness`). A silent variant keeps gain 0. The clips' own arrays
 * become the samples: half an hour of sound is not to lie in memory twice.
 */
export function levelSounds(
  clips: readonly RenderedClip[],
  rateHertz: number,
  match: 'level' | 'loudness',
): SoundLevels {
  const largest = Math.max(0, ...clips.map((clip) => clip.peakVolts));
  const fullScaleVolts = largest > 0 ? largest / 10 ** (PEAK_DECIBELS / 20) : 1;
  const flat = clips.map((clip) => scaled(clip.volts, (volts) => volts / fullScaleVolts));
  const loudness = flat.map((samples) => integratedLoudness([samples], rateHertz));
  const measured = clips.map(({ peakVolts }, k) => ({
    peak: peakVolts / fullScaleVolts,
    loudnessLufs: loudness[k] ?? null,
  }));
  const gains = match === 'loudness' ? matchedGains(measured) : flat.map(() => 0);
  return {
    fullScaleVolts,
    sounds: flat.map((samples, k) => {
      const gainDecibels = gains[k] as number;
      const factor = 10 ** (gainDecibels / 20);
      const own = loudness[k] ?? null;
      return {
        gainDecibels,
        loudnessLufs: own === null ? null : own + gainDecibels,
        samples: gainDecibels === 0 ? samples : scaled(samples, (value) => value * factor),
      };
    }),
  };
}

function scaled(samples: Float64Array, by: (value: number) => number): Float64Array {
  for (let n = 0; n < samples.length; n++) samples[n] = by(samples[n] as number);
  return samples;
}
