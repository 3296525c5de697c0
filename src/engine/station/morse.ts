import { InputError } from '../errors.ts';
import { type KeyedText, keyedText } from './morse-code.ts';

/** How a text is sent. */
export interface MorseSending {
  readonly text: string;
  readonly wordsPerMinute: number;
  /** Each edge is a raised cosine of this length, from nothing to all; s. */
  readonly edgeSeconds: number;
}

/** Silence ahead of the first mark and after the last, in dots: the space between words. */
const WORD_SPACE = 7;

/**
 * Length of a dot, s. PARIS with the space after it is 50 dots, and that many words go to the minute: 60 / 50 / speed.
 * The Recommendation states no speed; the word is the trade's (seen at https://kent-engineers.com/codespeed.htm).
 */
export function dotSeconds(wordsPerMinute: number): number {
  return 1.2 / wordsPerMinute;
}

/** A mark of the key in samples, from the instant at which the carrier stands half way. */
export interface SampledMark {
  readonly from: number;
  readonly to: number;
}

/** Marks in samples. Every instant is rounded by itself from the start of the text, so that no error adds up. */
export function sampledMarks(keyed: KeyedText, wordsPerMinute: number, rateHertz: number): SampledMark[] {
  const samples = (dots: number): number => Math.round(dots * dotSeconds(wordsPerMinute) * rateHertz);
  return keyed.marks.map(({ start, length }) => ({
    from: samples(WORD_SPACE + start),
    to: samples(WORD_SPACE + start + length),
  }));
}

/**
 * Carrier of a keyed station, 0 key up to 1 key down, at a sample rate. The edges stand half way at the instants of the
 * code, so that marks and spaces keep their lengths whatever the edge.
 *
 * @param where  key or flag of the text, for its faults
 * @throws InputError `no-morse-sign`, `no-morse-text`, `edge-too-long`
 */
export function keyedCarrier(sending: MorseSending, rateHertz: number, where: string): Float64Array {
  const keyed = keyedText(sending.text, where);
  const dot = dotSeconds(sending.wordsPerMinute);
  if (sending.edgeSeconds > dot) {
    throw new InputError({
      code: 'edge-too-long',
      where,
      got: `edges of ${(1000 * sending.edgeSeconds).toFixed(1)} ms`,
      expected: `at most a dot, ${(1000 * dot).toFixed(1)} ms at ${sending.wordsPerMinute} words a minute`,
    });
  }
  const carrier = new Float64Array(Math.round((keyed.dots + 2 * WORD_SPACE) * dot * rateHertz));
  const half = (sending.edgeSeconds * rateHertz) / 2;
  for (const { from, to } of sampledMarks(keyed, sending.wordsPerMinute, rateHertz)) {
    const last = Math.min(carrier.length - 1, Math.ceil(to + half));
    for (let n = Math.max(0, Math.floor(from - half)); n <= last; n++) {
      carrier[n] = (carrier[n] as number) + raised(n - from, half) - raised(n - to, half);
    }
  }
  return carrier;
}

/** A raised cosine from 0 to 1 over twice `half`, half way at 0. */
function raised(samples: number, half: number): number {
  if (samples <= -half) return 0;
  if (samples >= half) return 1;
  return 0.5 * (1 + Math.sin((Math.PI * samples) / (2 * half)));
}

/**
 * A clip of on-off keying as a carrier: 0 is key up, its largest sample key down; negative samples count as up.
 */
export function carrierOfClip(clip: Float64Array): Float64Array {
  let largest = 0;
  for (const value of clip) if (value > largest) largest = value;
  return clip.map((value) => (largest > 0 && value > 0 ? value / largest : 0));
}
