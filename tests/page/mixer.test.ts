import { describe, expect, it } from 'vitest';
import { Mixer } from '../../src/page/player/mixer.ts';

const RATE = 48_000;
/** The crossfade, as the player has it: 12 ms. */
const FADE = 576;

/** Two sounds that are unlike everywhere. */
const tone = (hertz: number, frames: number): Float32Array =>
  Float32Array.from({ length: frames }, (_, n) => 0.5 * Math.sin((2 * Math.PI * hertz * n) / RATE + hertz));

function loaded(frames: number): { mixer: Mixer; a: Float32Array; b: Float32Array } {
  const mixer = new Mixer(RATE, frames);
  const [a, b] = [tone(311, frames), tone(1777, frames)];
  for (const [name, samples] of [
    ['a', a],
    ['b', b],
  ] as const) {
    mixer.load(name, 0, frames, 1);
    mixer.fill(name, samples);
  }
  mixer.select('a');
  return { mixer, a, b };
}

function run(mixer: Mixer, frames: number): Float32Array {
  const output = new Float32Array(frames);
  mixer.process(output);
  return output;
}

const worst = (x: Float32Array, y: (n: number) => number): number =>
  x.reduce((most, value, n) => Math.max(most, Math.abs(value - y(n))), 0);

describe('the player', () => {
  it('plays a sound from its place, after a fade of 12 ms', () => {
    const { mixer, a } = loaded(RATE);
    mixer.seek(1000);
    expect(worst(run(mixer, 500), () => 0)).toBe(0);
    mixer.play();
    const heard = run(mixer, 4000);
    // samples pass through unchanged but for the rounding of a product with 1
    expect(worst(heard.subarray(FADE), (n) => a[1000 + FADE + n]!)).toBe(0);
    expect(mixer.state).toEqual({ position: 5000, playing: true, waiting: false });
  });

  it('changes sounds at the same instant, through a mixture whose shares add up to one', () => {
    const { mixer, a, b } = loaded(RATE);
    mixer.play();
    run(mixer, 5000);
    mixer.select('b');
    const heard = run(mixer, 3000);
    const share = (n: number): number => 0.5 - 0.5 * Math.cos((Math.PI * Math.min(n + 1, FADE)) / FADE);
    const wanted = (n: number): number => (1 - share(n)) * a[5000 + n]! + share(n) * b[5000 + n]!;
    // 32-bit floats of half of full scale
    expect(worst(heard, wanted)).toBeLessThan(2 ** -24);
  });

  it('makes no step however fast one changes', () => {
    const { mixer, a, b } = loaded(RATE);
    mixer.play();
    run(mixer, 2000);
    const pieces: number[] = [];
    for (let k = 0; k < 200; k++) {
      mixer.select(k % 2 === 0 ? 'b' : 'a');
      if (k % 7 === 0) mixer.seek(3000 + 37 * k);
      if (k % 11 === 0) mixer.pause();
      if (k % 11 === 1) mixer.play();
      pieces.push(...run(mixer, 53));
    }
    const step = (x: ArrayLike<number>): number =>
      Array.from({ length: x.length - 1 }, (_, n) => Math.abs(x[n + 1]! - x[n]!)).reduce((m, v) => Math.max(m, v), 0);
    // a fade moves by at most π/2 · (largest difference)/fade a sample, above what the sounds themselves do
    const fade = (Math.PI / 2 / FADE) * 1;
    expect(step(pieces)).toBeLessThan(Math.max(step(a), step(b)) + fade);
  });

  it('repeats a loop in exactly its length, and stops at the end without one', () => {
    const { mixer, a } = loaded(20_000);
    mixer.setLoop({ from: 4000, to: 12_000 });
    mixer.seek(4000);
    mixer.play();
    const heard = run(mixer, 3 * 8000);
    for (const round of [0, 1, 2]) {
      const piece = heard.subarray(round * 8000 + FADE, (round + 1) * 8000 - FADE);
      expect(worst(piece, (n) => a[4000 + FADE + n]!)).toBe(0);
    }
    mixer.setLoop(null);
    run(mixer, 20_000);
    expect(mixer.state.playing).toBe(false);
    expect(worst(run(mixer, 1000), () => 0)).toBe(0);
    mixer.play();
    expect(worst(run(mixer, 2000).subarray(FADE), (n) => a[FADE + n]!)).toBe(0);
  });

  it('keeps the sound before while the wanted one is not there yet, and holds the place when none is', () => {
    const { mixer, a, b } = loaded(RATE);
    mixer.play();
    run(mixer, 2000);
    mixer.load('c', 2500, 4000, 1);
    mixer.select('c');
    expect(worst(run(mixer, 500), (n) => a[2000 + n]!)).toBe(0);
    mixer.fill('c', b.subarray(2500, 4500));
    const heard = run(mixer, 1500);
    expect(worst(heard.subarray(FADE), (n) => b[2500 + FADE + n]!)).toBe(0);
    // past what is filled the sound before stands in
    expect(worst(run(mixer, 2000).subarray(500 + FADE), (n) => a[4500 + FADE + n]!)).toBe(0);
    mixer.select('nothing yet');
    mixer.drop('a');
    mixer.drop('c');
    const empty = new Mixer(RATE, 1000);
    empty.select('nothing yet');
    empty.play();
    run(empty, 5000);
    expect(empty.state).toEqual({ position: 0, playing: true, waiting: true });
  });

  it('moves a level without a step', () => {
    const mixer = new Mixer(RATE, 20_000);
    mixer.load('a', 0, 20_000, 1);
    mixer.fill('a', new Float32Array(20_000).fill(0.5));
    mixer.select('a');
    mixer.play();
    run(mixer, 2000);
    mixer.setLevel('a', 0.25);
    const heard = run(mixer, 4000);
    for (let n = 1; n < heard.length; n++) expect(Math.abs(heard[n]! - heard[n - 1]!)).toBeLessThan(0.001);
    expect(heard[3999]).toBe(0.125);
  });

  it('gives the same samples for any split into blocks', () => {
    const whole = loaded(RATE);
    const split = loaded(RATE);
    for (const { mixer } of [whole, split]) mixer.play();
    const all = run(whole.mixer, 6000);
    const pieces = [1, 128, 3, 700, 5168].flatMap((frames) => [...run(split.mixer, frames)]);
    expect(worst(all, (n) => pieces[n]!)).toBe(0);
  });
});
