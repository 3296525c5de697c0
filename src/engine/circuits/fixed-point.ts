import { solveReal } from './dense-solve.ts';

/** Earlier rounds that a new estimate is mixed from. */
const DEPTH = 5;

/**
 * Mixes the rounds of a fixed-point search x = G(x) so that it ends in few rounds: of the last rounds' moves that
 * combination is taken that leaves least of a change.
 *
 * Source: D. G. Anderson, Iterative procedures for nonlinear integral equations, J. ACM 12, 1965 (from memory).
 */
export class RoundMixer {
  private readonly points: Float64Array[] = [];
  private readonly moves: Float64Array[] = [];

  /**
   * @param at    x of this round
   * @param next  G(x)
   * @returns     x of the next round, a new array
   */
  mix(at: Float64Array, next: Float64Array): Float64Array {
    const move = next.map((value, k) => value - (at[k] as number));
    this.points.push(at.slice());
    this.moves.push(move);
    if (this.points.length > DEPTH + 1) {
      this.points.shift();
      this.moves.shift();
    }
    const count = this.moves.length - 1;
    const plain = at.map((value, k) => value + (move[k] as number));
    if (count === 0) return plain;
    const differences = Array.from({ length: count }, (_, j) =>
      move.map((value, k) => value - ((this.moves[j] as Float64Array)[k] as number)),
    );
    const normal = new Float64Array(count * count);
    const right = new Float64Array(count);
    let trace = 0;
    for (let i = 0; i < count; i++) {
      for (let j = 0; j < count; j++) normal[i * count + j] = dot(differences[i], differences[j]);
      right[i] = dot(differences[i], move);
      trace += normal[i * count + i] as number;
    }
    // a touch of damping keeps nearly equal rounds from cancelling
    for (let i = 0; i < count; i++) normal[i * count + i] = (normal[i * count + i] as number) + 1e-14 * trace;
    if (!solveReal(normal, count, right, 1)) return plain;
    for (let j = 0; j < count; j++) {
      const weight = right[j] as number;
      const point = this.points[j] as Float64Array;
      const earlier = this.moves[j] as Float64Array;
      for (let k = 0; k < plain.length; k++) {
        const now = (at[k] as number) + (move[k] as number);
        plain[k] = (plain[k] as number) - weight * (now - (point[k] as number) - (earlier[k] as number));
      }
    }
    return plain;
  }
}

function dot(a: Float64Array | undefined, b: Float64Array | undefined): number {
  let sum = 0;
  if (a && b) for (let k = 0; k < a.length; k++) sum += (a[k] as number) * (b[k] as number);
  return sum;
}
