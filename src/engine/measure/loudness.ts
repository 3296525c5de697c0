/** A second-order section as the Recommendation prints it: b0, b1, b2, then a1, a2 (a0 is 1). */
type Section = readonly [number, number, number, number, number];

/** ITU-R BS.1770-4, Annex 1, tables 1 and 2, at 48 kHz (from memory, identical in public copies that were seen). */
const TABLE_RATE_HERTZ = 48000;
const SHELF: Section = [1.53512485958697, -2.69169618940638, 1.19839281085285, -1.69065929318241, 0.73248077421585];
const HIGH_PASS: Section = [1, -2, 1, -1.99004745483398, 0.99007225036621];

/** BS.1770-4: offset of the scale, so that 997 Hz at full scale in one channel reads −3.01. */
const OFFSET_LUFS = -0.691;
const ABSOLUTE_GATE_LUFS = -70;
const RELATIVE_GATE_LU = -10;
const BLOCK_SECONDS = 0.4;
const HOP_SECONDS = 0.1;

/**
 * A table section at another sample rate: back through the bilinear transform to its analogue prototype, and forward again
 * with the prototype's own frequency held. At 48 kHz it is the table itself, to rounding. Derived here: in
 * w = (1 − z⁻¹)/(1 + z⁻¹) a section is (B0 + B1·w + B2·w²)/(A0 + A1·w + A2·w²), the prototype's frequency is
 * w0 = √(A0/A2) = tan(π·f0/rate), and a new rate only scales w.
 */
export function kSection(table: 'shelf' | 'high-pass', sampleRateHertz: number): Section {
  const [b0, b1, b2, a1, a2] = table === 'shelf' ? SHELF : HIGH_PASS;
  const w0 = Math.sqrt((1 + a1 + a2) / (1 - a1 + a2));
  const scale = w0 / Math.tan((Math.atan(w0) * TABLE_RATE_HERTZ) / sampleRateHertz);
  const B = [b0 + b1 + b2, 2 * (b0 - b2) * scale, (b0 - b1 + b2) * scale * scale] as const;
  const A = [1 + a1 + a2, 2 * (1 - a2) * scale, (1 - a1 + a2) * scale * scale] as const;
  const norm = A[0] + A[1] + A[2];
  return [
    (B[0] + B[1] + B[2]) / norm,
    (2 * (B[0] - B[2])) / norm,
    (B[0] - B[1] + B[2]) / norm,
    (2 * (A[0] - A[2])) / norm,
    (A[0] - A[1] + A[2]) / norm,
  ];
}

/**
 * Integrated loudness, LUFS, of one or two channels by ITU-R BS.1770-4: K weighting, blocks of 400 ms that overlap by three
 * quarters, gated at −70 LUFS and then 10 LU below the mean of what is left.
 *
 * @param channels         1 (mono) or 2 (left and right) arrays of equal length, full scale 1
 * @param sampleRateHertz  8000 and up; below 11 kHz the weighting is bent by up to 0.2 LU
 * @returns null when every block is gated (silence) or the clip is shorter than one block
 */
export function integratedLoudness(channels: readonly Float64Array[], sampleRateHertz: number): number | null {
  const powers = blockPowers(channels, sampleRateHertz);
  const audible = powers.filter((power) => loudnessOfPower(power) > ABSOLUTE_GATE_LUFS);
  if (audible.length === 0) return null;
  const gate = loudnessOfPower(mean(audible)) + RELATIVE_GATE_LU;
  const counted = audible.filter((power) => loudnessOfPower(power) > gate);
  return counted.length === 0 ? null : loudnessOfPower(mean(counted));
}

/** Loudness of a K-weighted mean square summed over channels, LUFS; minus infinity for 0. */
function loudnessOfPower(power: number): number {
  return OFFSET_LUFS + 10 * Math.log10(power);
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

/** K-weighted mean square of every whole block, channels summed with the weight 1 of left, right and mono. */
function blockPowers(channels: readonly Float64Array[], sampleRateHertz: number): number[] {
  const frames = channels[0]?.length ?? 0;
  const block = Math.round(BLOCK_SECONDS * sampleRateHertz);
  const starts: number[] = [];
  for (let k = 0; ; k++) {
    const start = Math.round(k * HOP_SECONDS * sampleRateHertz);
    if (start + block > frames) break;
    starts.push(start);
  }
  const powers = starts.map(() => 0);
  for (const channel of channels) addBlockEnergies(channel, sampleRateHertz, starts, block, powers);
  return powers.map((energy) => energy / block);
}

/** Adds each block's energy of the K-weighted channel; one pass, no filtered copy of the clip. */
function addBlockEnergies(
  channel: Float64Array,
  sampleRateHertz: number,
  starts: readonly number[],
  block: number,
  energies: number[],
): void {
  const [b0, b1, b2, a1, a2] = kSection('shelf', sampleRateHertz);
  const [c0, c1, c2, d1, d2] = kSection('high-pass', sampleRateHertz);
  const before = starts.map(() => 0);
  let begun = 0;
  let ended = 0;
  let s1 = 0;
  let s2 = 0;
  let t1 = 0;
  let t2 = 0;
  let energy = 0;
  for (let n = 0; n < channel.length; n++) {
    if (n === starts[begun]) before[begun++] = energy;
    const x = channel[n]!;
    const y = b0 * x + s1;
    s1 = b1 * x - a1 * y + s2;
    s2 = b2 * x - a2 * y;
    const z = c0 * y + t1;
    t1 = c1 * y - d1 * z + t2;
    t2 = c2 * y - d2 * z;
    energy += z * z;
    if (ended < starts.length && n + 1 === starts[ended]! + block) {
      // a difference of running sums may fall below zero by rounding after a loud passage
      energies[ended] = energies[ended]! + Math.max(0, energy - before[ended]!);
      ended++;
    }
  }
}
