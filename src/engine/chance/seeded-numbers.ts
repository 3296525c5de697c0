/**
 * Numbers from 0 to 1 in an order fixed by a seed and a run: xoshiro128**, 32 bits at a time.
 *
 * Every run has a stream of its own, so that run 400 is the same whoever works it out and however many there are.
 *
 * Source: D. Blackman and S. Vigna, Scrambled linear pseudorandom number generators, ACM Trans. Math. Softw. 47, 2021
 * (from memory); the state is filled by the finishing steps of MurmurHash3 (A. Appleby, public domain, from memory).
 */
export class SeededNumbers {
  private readonly s: Uint32Array;

  /** @param state  four words, not all 0 */
  constructor(state: readonly [number, number, number, number]) {
    this.s = Uint32Array.from(state);
  }

  /** The stream of one run. @param seed 0 to 2^53 @param run 0 to 2^32 */
  static ofRun(seed: number, run: number): SeededNumbers {
    let mixed = finished(Math.floor(seed / 2 ** 32) ^ finished(seed >>> 0));
    const next = (k: number): number => {
      mixed = finished(mixed ^ finished(Math.imul(run + 1, 0x9e3779b1) + Math.imul(k, 0x85ebca77)));
      return mixed;
    };
    return new SeededNumbers([next(1), next(2), next(3), next(4) | 1]);
  }

  /** The next 32 bits, 0 to 2^32 − 1. */
  bits(): number {
    const s = this.s;
    const [s0, s1, s2, s3] = [s[0] as number, s[1] as number, s[2] as number, s[3] as number];
    const result = Math.imul(turned(Math.imul(s1, 5), 7), 9) >>> 0;
    const a2 = s2 ^ s0;
    const a3 = s3 ^ s1;
    s[1] = s1 ^ a2;
    s[0] = s0 ^ a3;
    s[2] = a2 ^ (s1 << 9);
    s[3] = turned(a3, 11);
    return result;
  }

  /** A number from 0 to below 1, in 2^53 steps. */
  share(): number {
    const high = this.bits() >>> 5;
    const low = this.bits() >>> 6;
    return (high * 2 ** 26 + low) / 2 ** 53;
  }
}

function turned(x: number, by: number): number {
  return (x << by) | (x >>> (32 - by));
}

function finished(x: number): number {
  let h = x >>> 0;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
}
