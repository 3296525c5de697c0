import { InputError } from '../errors.ts';
import { type FiniteFilter, filterAligned, linearPhaseLowPass, minimumPhaseFilter } from './finite-filter.ts';

export type PreEmphasis = 'none' | 'nrsc-1';
export type BandLimit = 'none' | 'channel 9 kHz';

/** NRSC-1 'modified 75 µs': zero at 1/(2π·75 µs) = 2122 Hz, pole at 8700 Hz (from memory). */
const ZERO_HERTZ = 1 / (2 * Math.PI * 75e-6);
const POLE_HERTZ = 8700;

/** Taps of the curve: at 64 the cut-off tail is below 0.01 dB at every rate from 8 to 192 kHz. */
const CURVE_TAPS = 64;

/** Ours: flat to 9.5 kHz, and past every point of the NRSC-1 stop band (−15 dB at 10 kHz, −30 at 10.5, −40 at 11, −50 at 15). */
const AUDIO_LIMIT = { passHertz: 9500, stopHertz: 10100, decibels: 56 } as const;
/** Ours, no standard: the half-channel of a 9 kHz raster, 6 dB down at 4.5 kHz. */
const CHANNEL_LIMIT = { passHertz: 4200, stopHertz: 4800, decibels: 56 } as const;

/** Sample rates the filters are held to. */
const RATE_RANGE_HERTZ = [8000, 192000] as const;

/** Magnitude of the NRSC-1 pre-emphasis at a frequency in Hz, 1 at DC: √[(1+(f/2122)²)/(1+(f/8700)²)]. */
export function preEmphasisMagnitude(hertz: number): number {
  return Math.sqrt((1 + (hertz / ZERO_HERTZ) ** 2) / (1 + (hertz / POLE_HERTZ) ** 2));
}

/** The pre-emphasis curve as a filter, within 0.05 dB of the analogue one to 10 kHz or 0.45 of the rate. */
export function preEmphasisFilter(sampleRateHertz: number): FiniteFilter {
  return minimumPhaseFilter(preEmphasisMagnitude, CURVE_TAPS, sampleRateHertz);
}

/** The band limit that applies: the channel's, else NRSC-1's own; null where half of the rate already lies below it. */
export function bandLimitFilter(kind: PreEmphasis, bandLimit: BandLimit, sampleRateHertz: number): FiniteFilter | null {
  const limit = bandLimit === 'channel 9 kHz' ? CHANNEL_LIMIT : kind === 'nrsc-1' ? AUDIO_LIMIT : null;
  if (limit === null || sampleRateHertz / 2 <= (limit.passHertz + limit.stopHertz) / 2) return null;
  return linearPhaseLowPass(limit.passHertz, limit.stopHertz, limit.decibels, sampleRateHertz);
}

/**
 * What a transmitter does to its programme before modulating: pre-emphasis with its band limit, and on request the limit of a
 * crowded channel. Gain is 1 at low frequencies, so the peaks rise: the caller normalises afterwards.
 *
 * @param samples          programme, any unit, finite; not changed
 * @param sampleRateHertz  8 to 192 kHz
 * @param kind             'none' or 'nrsc-1' (pre-emphasis and its 10 kHz stop band)
 * @param bandLimit        'none' or 'channel 9 kHz' (4.5 kHz, in place of the 10 kHz limit)
 * @returns an array of the same length, in time with the input; the input itself where there is nothing to do
 * @throws InputError `rate-out-of-range`
 */
export function preEmphasise(
  samples: Float64Array,
  sampleRateHertz: number,
  kind: PreEmphasis,
  bandLimit: BandLimit,
): Float64Array {
  const [lowest, highest] = RATE_RANGE_HERTZ;
  if (!(sampleRateHertz >= lowest && sampleRateHertz <= highest)) {
    throw new InputError({
      code: 'rate-out-of-range',
      where: 'sample rate',
      got: `${sampleRateHertz} Hz`,
      expected: '8 kHz to 192 kHz',
    });
  }
  const emphasised = kind === 'nrsc-1' ? filterAligned(samples, preEmphasisFilter(sampleRateHertz)) : samples;
  const limit = bandLimitFilter(kind, bandLimit, sampleRateHertz);
  return limit === null ? emphasised : filterAligned(emphasised, limit);
}
