/**
 * Nominal third-octave frequencies of ISO 266 from 25 Hz to 16 kHz, Hz (R10 series, as printed in standards tables; seen at
 * http://blog.prosig.com/2006/02/17/standard-octave-bands/trackback/). The labels a builder reads.
 */
export const THIRD_OCTAVE_NOMINAL_HERTZ: readonly number[] = [
  25, 31.5, 40, 50, 63, 80, 100, 125, 160, 200, 250, 315, 400, 500, 630, 800, 1000, 1250, 1600, 2000, 2500, 3150, 4000,
  5000, 6300, 8000, 10000, 12500, 16000,
];

/** Steps from 1 kHz of the first entry, 25 Hz. */
const FIRST_STEP = -16;

/** The exact frequencies behind the nominal ones, Hz: 1000·10^(n/10), at most 0.95 % from their labels. */
export const THIRD_OCTAVE_EXACT_HERTZ: readonly number[] = THIRD_OCTAVE_NOMINAL_HERTZ.map(
  (_, index) => 1000 * 10 ** ((FIRST_STEP + index) / 10),
);
