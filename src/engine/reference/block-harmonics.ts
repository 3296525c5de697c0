/** Highest harmonic that is reported. */
export const HIGHEST_HARMONIC = 10;

/**
 * Harmonics of an audio period from block means, by direct sums over whole periods.
 *
 * A mean over a block of the period lowers harmonic n by about sin(πn/K)/(πn/K) (K blocks a period; exactly, the
 * ratio for the finite number of steps in a block); this is taken back. The sum over whole periods is blind to the
 * carrier and its sidebands, because they are other lines of the same series (there are 8 blocks a carrier cycle).
 *
 * @param blocks triples of means, oldest first from `first`, wrapping round. @param channel 0, 1 or 2.
 * @returns mean (signed) and peak volts of harmonics 1 to 10 at their index; index 0 holds the mean.
 */
export function blockHarmonics(
  blocks: Float64Array,
  first: number,
  channel: number,
  blocksPerPeriod: number,
  periods: number,
  stepsPerBlock: number,
): Float64Array {
  const count = blocksPerPeriod * periods;
  const cos = new Float64Array(blocksPerPeriod);
  const sin = new Float64Array(blocksPerPeriod);
  for (let k = 0; k < blocksPerPeriod; k++) {
    cos[k] = Math.cos((2 * Math.PI * k) / blocksPerPeriod);
    sin[k] = Math.sin((2 * Math.PI * k) / blocksPerPeriod);
  }
  const peaks = new Float64Array(HIGHEST_HARMONIC + 1);
  for (let n = 0; n <= HIGHEST_HARMONIC; n++) {
    let re = 0;
    let im = 0;
    let at = first;
    let turn = 0;
    for (let k = 0; k < count; k++) {
      const v = blocks[at + channel]!;
      re += v * cos[turn]!;
      im += v * sin[turn]!;
      turn += n;
      if (turn >= blocksPerPeriod) turn -= blocksPerPeriod;
      at += 3;
      if (at === blocks.length) at = 0;
    }
    if (n === 0) peaks[0] = re / count;
    else {
      const half = (Math.PI * n) / (blocksPerPeriod * stepsPerBlock);
      const loss = Math.sin(stepsPerBlock * half) / (stepsPerBlock * Math.sin(half));
      peaks[n] = (2 * Math.hypot(re, im)) / count / loss;
    }
  }
  return peaks;
}
