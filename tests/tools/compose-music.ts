// Composes samples/music.wav: a waltz of eight bars for plucked strings, reeds and brushes, our own tune.
//
// Run: npx tsx tests/tools/compose-music.ts samples/music.wav
//
// Only the four operations and whole-number shifts are used below, no library sine or power: IEEE 754 fixes their last
// bit, so every machine writes the same bytes.
import { writeFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { writeWav } from '../../src/results/wav-write.ts';

const RATE_HERTZ = 48_000;
/** 144 beats a minute. */
const BEAT_FRAMES = 20_000;
const BAR_FRAMES = 3 * BEAT_FRAMES;
/** Eight bars and nearly two seconds for the last chord to ring. */
const FRAMES = 8 * BAR_FRAMES + 90_000;
/** −1 dB of full scale: 10^(−1/20). */
const PEAK = 0.891250938;
/** Highest partial: well below half the sample rate, so nothing folds back, and above any receiver's audio. */
const TOP_HERTZ = 11_000;
/** Two to the power of a twelfth. */
const SEMITONE = 1.0594630943592953;
const SEED = 1925;

/** The tune a bar a line: note, and its length in beats. */
const MELODY = [
  'B4:1 A4:0.5 G4:0.5 D5:1',
  'E5:1.5 F#5:0.5 G5:1',
  'E5:1 C5:0.5 D5:0.5 E5:1',
  'F#5:1 E5:0.5 C5:0.5 A4:1',
  'B4:0.5 D5:0.5 G5:1 F#5:1',
  'E5:1.5 D5:0.5 C5:1',
  'A4:0.5 C5:0.5 F#5:0.5 E5:0.5 D5:0.5 F#4:0.5',
  'G4:3',
];
/** Bass string and the two reeds over it, a bar each: G, E minor, C, D, G, A minor, D, G. */
const CHORDS = ['G2 B3 D4', 'E2 B3 E4', 'C3 C4 E4', 'D3 C4 F#4', 'G2 B3 D4', 'A2 C4 E4', 'D3 C4 F#4', 'G2 B3 D4'];
/** Semitones above C, by the note's letter. */
const STEPS: Readonly<Record<string, number>> = { C: 0, D: 2, E: 4, F: 5, G: 7, A: 9, B: 11 };

/** Cosine and sine by their power series; angle from −π to π, where 30 terms are beyond the last bit. */
function turn(angle: number): { cosine: number; sine: number } {
  let [cosine, sine, term] = [0, 0, 1];
  for (let n = 0; n < 30; n++) {
    const signed = n % 4 < 2 ? term : -term;
    if (n % 2 === 0) cosine += signed;
    else sine += signed;
    term *= angle / (n + 1);
  }
  return { cosine, sine };
}

/** Frequency of a note such as F#4, equal temperament on A4 = 440 Hz (ISO 16, from memory). */
function pitchHertz(note: string): number {
  const above = STEPS[note.charAt(0)]! + (note.includes('#') ? 1 : 0) + 12 * Number(note.at(-1)) - 57;
  let hertz = 440;
  for (let n = 0; n < above; n++) hertz *= SEMITONE;
  for (let n = 0; n > above; n--) hertz /= SEMITONE;
  return hertz;
}

interface Partial {
  readonly hertz: number;
  readonly amplitude: number;
  /** Fall per second of its logarithm. */
  readonly decayPerSecond: number;
  readonly attackFrames: number;
  readonly releaseFrames: number;
}

/** Adds one dying sine: a phasor turned and shortened once a sample. */
function addPartial(sound: Float64Array, start: number, frames: number, partial: Partial): void {
  const { cosine, sine } = turn((2 * Math.PI * partial.hertz) / RATE_HERTZ);
  const kept = 1 - partial.decayPerSecond / RATE_HERTZ;
  let [x, y] = [partial.amplitude, 0];
  const end = Math.min(frames, FRAMES - start);
  for (let n = 0; n < end && x * x + y * y > 1e-11; n++) {
    const gain = Math.min(1, (n + 1) / partial.attackFrames, (end - n) / partial.releaseFrames);
    sound[start + n]! += y * gain;
    [x, y] = [kept * (x * cosine - y * sine), kept * (x * sine + y * cosine)];
  }
}

/** A string plucked at a fifth of its length, heard at the bridge: partial k is sin(kπ/5)/k, the treble dies first. */
function addString(sound: Float64Array, start: number, frames: number, hertz: number, loudness: number): void {
  const pluck = turn(Math.PI / 5);
  let [x, y] = [pluck.cosine, pluck.sine];
  for (let k = 1; k * hertz < TOP_HERTZ; k++) {
    const kilohertz = (k * hertz) / 1000;
    const decayPerSecond = 1.2 + 0.1 * kilohertz * kilohertz;
    const shape = { decayPerSecond, attackFrames: 24, releaseFrames: 2400 };
    addPartial(sound, start, frames, { hertz: k * hertz, amplitude: (loudness * y) / k, ...shape });
    [x, y] = [x * pluck.cosine - y * pluck.sine, x * pluck.sine + y * pluck.cosine];
  }
}

/** Two reeds tuned to beat one and a half times a second, as in an accordion; partials fall as 1/k. */
function addReeds(sound: Float64Array, start: number, frames: number, hertz: number, loudness: number): void {
  const shape = { decayPerSecond: 0.4, attackFrames: 3600, releaseFrames: 9600 };
  for (const reed of [hertz - 0.75, hertz + 0.75]) {
    for (let k = 1; k * reed < TOP_HERTZ; k++) {
      addPartial(sound, start, frames, { hertz: k * reed, amplitude: loudness / k, ...shape });
    }
  }
}

/** Numbers from −1 to 1. Generator: Marsaglia, Xorshift RNGs, J. Stat. Softw. 8(14), 2003, from memory. */
function noiseFrom(seed: number): () => number {
  let state = seed;
  return () => {
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    return state / 2 ** 31;
  };
}

/** A brush on a drum head: noise, most of it from 2 to 11 kHz, that rises and falls. */
function addBrush(sound: Float64Array, start: number, rise: number, fall: number, noise: () => number): void {
  let [last, beforeLast, smooth, smoother] = [0, 0, 0, 0];
  for (let n = 0; n < rise + fall; n++) {
    const fresh = noise();
    smooth += 0.5 * (fresh - beforeLast - smooth);
    smoother += 0.5 * (smooth - smoother);
    beforeLast = last;
    last = fresh;
    const envelope = n < rise ? n / rise : (rise + fall - n) / fall;
    sound[start + n]! += 0.8 * envelope * envelope * smoother;
  }
}

/** The whole tune, mono, peak at −1 dB of full scale. */
function composeWaltz(): Float64Array {
  const sound = new Float64Array(FRAMES);
  const noise = noiseFrom(SEED);
  CHORDS.forEach((chord, bar) => {
    const start = bar * BAR_FRAMES;
    const isLast = bar === CHORDS.length - 1;
    const [bass, ...reeds] = chord.split(' ').map(pitchHertz);
    const frames = isLast ? FRAMES - start : BAR_FRAMES;
    addString(sound, start, frames, bass!, 0.9);
    for (const reed of reeds) addReeds(sound, start, frames, reed, 0.035);
    addBrush(sound, start, 100, 3000, noise);
    for (const beat of [1, 2]) addBrush(sound, start + beat * BEAT_FRAMES - 5000, 5000, 6000, noise);
    let at = start;
    for (const written of MELODY[bar]!.split(' ')) {
      const [note, beats] = written.split(':');
      const noteFrames = Number(beats) * BEAT_FRAMES;
      // every note rings half a second into the next, as an open string does, and the last one to the end
      addString(sound, at, isLast ? FRAMES : noteFrames + 24_000, pitchHertz(note!), 1);
      at += noteFrames;
    }
  });
  const highest = sound.reduce((most, sample) => Math.max(most, sample, -sample), 0);
  return sound.map((sample) => (sample * PEAK) / highest);
}

/** The bytes of samples/music.wav. */
export function composeMusic(): Uint8Array {
  const comment = 'A waltz of our own, synthesised by tests/tools/compose-music.ts; MIT licence';
  const samples = composeWaltz();
  return writeWav({ samples, sampleRateHertz: RATE_HERTZ, format: '16', comment, ditherSeed: SEED }).bytes;
}

const named = process.argv[2];
if (named !== undefined && resolve(process.argv[1] ?? '') === fileURLToPath(import.meta.url)) {
  writeFileSync(named, composeMusic());
}
