import {
  averageAtNodes,
  CHORD,
  CHORD_BY_A,
  CHORD_BY_X,
  CHORD_BY_XA,
  CHORD_BY_XX,
  type CycleLaw,
  MEAN,
  MEAN_BY_A,
  MEAN_BY_X,
  MEAN_BY_XA,
  MEAN_BY_XX,
  nodesFor,
} from './cycle-average.ts';
import type { SmoothLaw } from './smooth-law.ts';

/** Numbers a table cell holds: two bicubics of 16 coefficients, mean and chord side by side, so that one vector load takes both. */
const CELL = 32;
/** Cells of an index that finds the knot interval of a voltage, per shortest interval. */
const INDEX_PER_CELL = 1;

/** Unevenly spaced knots with a constant-time search. */
export interface Axis {
  readonly knots: Float64Array;
  readonly inverse: Float64Array;
  readonly index: Int32Array;
  readonly perVolt: number;
}

function axisFrom(knots: number[], shortest: number): Axis {
  const first = knots[0] as number;
  const last = knots[knots.length - 1] as number;
  const perVolt = INDEX_PER_CELL / shortest;
  const index = new Int32Array(Math.ceil((last - first) * perVolt) + 2);
  let cell = 0;
  for (let k = 0; k < index.length; k++) {
    const volts = first + k / perVolt;
    while (cell < knots.length - 2 && (knots[cell + 1] as number) <= volts + 1e-12) cell++;
    index[k] = cell;
  }
  const inverse = Float64Array.from(
    { length: knots.length - 1 },
    (_, k) => 1 / ((knots[k + 1] as number) - (knots[k] as number)),
  );
  return { knots: Float64Array.from(knots), inverse, index, perVolt };
}

/** A tabulated law, with its parts for the kernel. */
export interface CycleTable extends CycleLaw {
  readonly parts: { readonly crest: Axis; readonly peak: Axis; readonly cells: Float64Array };
}

/** Knots for the crest voltage x + a: even through the tail and the knee, then widening by 6 % a cell. */
function crestKnots(scale: number, top: number): Axis {
  const step = 0.115 * scale;
  const knots: number[] = [];
  for (let v = -28 * scale; v < 3 * scale; v += step) knots.push(v);
  let width = step;
  while ((knots[knots.length - 1] as number) < top) {
    width *= 1.06;
    knots.push((knots[knots.length - 1] as number) + width);
  }
  return axisFrom(knots, step);
}

/** Knots for the carrier's peak: fine at weak signals, where detection is a second derivative, then widening by 7 %. */
function amplitudeKnots(scale: number, top: number): Axis {
  const step = 0.05 * scale;
  const knots: number[] = [];
  for (let k = 0; k <= 6; k++) knots.push(k * step);
  while ((knots[knots.length - 1] as number) < top) knots.push((knots[knots.length - 1] as number) * 1.07);
  return axisFrom(knots, step);
}

/**
 * A law's cycle averages as a table, for the renderer: bicubic in crest voltage x + a and carrier peak a, because a
 * strong carrier's current hangs on its crest alone and the table can then be narrow.
 *
 * Below the first crest knot (28 e-folds down, 1e-12 of the current at zero) nothing flows. Past the last knots the
 * last cell's slopes go on.
 *
 * @param law         the instantaneous law
 * @param topVolts    largest crest to cover, V
 * @param topCarrier  largest carrier peak to cover, V
 */
export function cycleTable(law: SmoothLaw, topVolts: number, topCarrier: number): CycleTable {
  const scale = law.scaleVolts;
  const crest = crestKnots(scale, topVolts);
  const peak = amplitudeKnots(scale, topCarrier);
  const cells = fillCells(law, crest, peak);
  const peakCells = peak.knots.length - 1;
  const lowest = crest.knots[0] as number;
  const highest = crest.knots[crest.knots.length - 1] as number;
  const widest = peak.knots[peak.knots.length - 1] as number;
  const { knots: ck, inverse: ci, index: cx, perVolt: cv } = crest;
  const { knots: pk, inverse: pi, index: px, perVolt: pv } = peak;
  const point = new Float64Array(2);
  return {
    parts: { crest, peak, cells },
    levelsAt(at, out) {
      const a = at[1] as number;
      const crestVolts = (at[0] as number) + a;
      if (!(crestVolts > lowest)) {
        out[MEAN] = 0;
        out[CHORD] = 0;
        return;
      }
      // past the last crest the slope is wanted too: leave that rare case to the full lookup
      if (!(crestVolts < highest)) {
        this.averageAt(at, out);
        return;
      }
      // by the library: a choice between a number and a kept one would box it, and the loop would take memory
      const ac = Math.max(0, Math.min(a, widest));
      let i = cx[((crestVolts - lowest) * cv) | 0] as number;
      if (crestVolts >= (ck[i + 1] as number) && i < ci.length - 1) i++;
      let j = px[(ac * pv) | 0] as number;
      if (ac >= (pk[j + 1] as number) && j < peakCells - 1) j++;
      const s = (crestVolts - (ck[i] as number)) * (ci[i] as number);
      const t = (ac - (pk[j] as number)) * (pi[j] as number);
      const o = (i * peakCells + j) * CELL;
      const m0 =
        (((cells[o + 6] as number) * t + (cells[o + 4] as number)) * t + (cells[o + 2] as number)) * t +
        (cells[o] as number);
      const m1 =
        (((cells[o + 14] as number) * t + (cells[o + 12] as number)) * t + (cells[o + 10] as number)) * t +
        (cells[o + 8] as number);
      const m2 =
        (((cells[o + 22] as number) * t + (cells[o + 20] as number)) * t + (cells[o + 18] as number)) * t +
        (cells[o + 16] as number);
      const m3 =
        (((cells[o + 30] as number) * t + (cells[o + 28] as number)) * t + (cells[o + 26] as number)) * t +
        (cells[o + 24] as number);
      out[MEAN] = ((m3 * s + m2) * s + m1) * s + m0;
      const n0 =
        (((cells[o + 7] as number) * t + (cells[o + 5] as number)) * t + (cells[o + 3] as number)) * t +
        (cells[o + 1] as number);
      const n1 =
        (((cells[o + 15] as number) * t + (cells[o + 13] as number)) * t + (cells[o + 11] as number)) * t +
        (cells[o + 9] as number);
      const n2 =
        (((cells[o + 23] as number) * t + (cells[o + 21] as number)) * t + (cells[o + 19] as number)) * t +
        (cells[o + 17] as number);
      const n3 =
        (((cells[o + 31] as number) * t + (cells[o + 29] as number)) * t + (cells[o + 27] as number)) * t +
        (cells[o + 25] as number);
      out[CHORD] = ((n3 * s + n2) * s + n1) * s + n0;
    },
    average(x, a, out) {
      point[0] = x;
      point[1] = a;
      this.averageAt(point, out);
    },
    averageAt(at, out) {
      const a = at[1] as number;
      const crestVolts = (at[0] as number) + a;
      if (!(crestVolts > lowest)) {
        out[MEAN] = 0;
        out[MEAN_BY_X] = 0;
        out[MEAN_BY_A] = 0;
        out[CHORD] = 0;
        out[CHORD_BY_X] = 0;
        out[CHORD_BY_A] = 0;
        return;
      }
      const pc = Math.min(crestVolts, highest);
      const ac = Math.max(0, Math.min(a, widest));
      let i = cx[((pc - lowest) * cv) | 0] as number;
      if (pc >= (ck[i + 1] as number) && i < ci.length - 1) i++;
      let j = px[(ac * pv) | 0] as number;
      if (ac >= (pk[j + 1] as number) && j < peakCells - 1) j++;
      const si = ci[i] as number;
      const sj = pi[j] as number;
      const s = (pc - (ck[i] as number)) * si;
      const t = (ac - (pk[j] as number)) * sj;
      const o = (i * peakCells + j) * CELL;
      const past = crestVolts - pc;
      // mean: four cubics in t with their slopes, then one cubic in s of each
      const ma3 = cells[o + 6] as number;
      const ma2 = cells[o + 4] as number;
      const ma1 = cells[o + 2] as number;
      const mb3 = cells[o + 14] as number;
      const mb2 = cells[o + 12] as number;
      const mb1 = cells[o + 10] as number;
      const mc3 = cells[o + 22] as number;
      const mc2 = cells[o + 20] as number;
      const mc1 = cells[o + 18] as number;
      const md3 = cells[o + 30] as number;
      const md2 = cells[o + 28] as number;
      const md1 = cells[o + 26] as number;
      const mr0 = ((ma3 * t + ma2) * t + ma1) * t + (cells[o] as number);
      const mr1 = ((mb3 * t + mb2) * t + mb1) * t + (cells[o + 8] as number);
      const mr2 = ((mc3 * t + mc2) * t + mc1) * t + (cells[o + 16] as number);
      const mr3 = ((md3 * t + md2) * t + md1) * t + (cells[o + 24] as number);
      const mq0 = (3 * ma3 * t + 2 * ma2) * t + ma1;
      const mq1 = (3 * mb3 * t + 2 * mb2) * t + mb1;
      const mq2 = (3 * mc3 * t + 2 * mc2) * t + mc1;
      const mq3 = (3 * md3 * t + 2 * md2) * t + md1;
      const mCrest = ((3 * mr3 * s + 2 * mr2) * s + mr1) * si;
      out[MEAN] = ((mr3 * s + mr2) * s + mr1) * s + mr0 + mCrest * past;
      out[MEAN_BY_X] = mCrest;
      out[MEAN_BY_A] = mCrest + (((mq3 * s + mq2) * s + mq1) * s + mq0) * sj;
      // chord: four cubics in t with their slopes, then one cubic in s of each
      const na3 = cells[o + 7] as number;
      const na2 = cells[o + 5] as number;
      const na1 = cells[o + 3] as number;
      const nb3 = cells[o + 15] as number;
      const nb2 = cells[o + 13] as number;
      const nb1 = cells[o + 11] as number;
      const nc3 = cells[o + 23] as number;
      const nc2 = cells[o + 21] as number;
      const nc1 = cells[o + 19] as number;
      const nd3 = cells[o + 31] as number;
      const nd2 = cells[o + 29] as number;
      const nd1 = cells[o + 27] as number;
      const nr0 = ((na3 * t + na2) * t + na1) * t + (cells[o + 1] as number);
      const nr1 = ((nb3 * t + nb2) * t + nb1) * t + (cells[o + 9] as number);
      const nr2 = ((nc3 * t + nc2) * t + nc1) * t + (cells[o + 17] as number);
      const nr3 = ((nd3 * t + nd2) * t + nd1) * t + (cells[o + 25] as number);
      const nq0 = (3 * na3 * t + 2 * na2) * t + na1;
      const nq1 = (3 * nb3 * t + 2 * nb2) * t + nb1;
      const nq2 = (3 * nc3 * t + 2 * nc2) * t + nc1;
      const nq3 = (3 * nd3 * t + 2 * nd2) * t + nd1;
      const nCrest = ((3 * nr3 * s + 2 * nr2) * s + nr1) * si;
      out[CHORD] = ((nr3 * s + nr2) * s + nr1) * s + nr0 + nCrest * past;
      out[CHORD_BY_X] = nCrest;
      out[CHORD_BY_A] = nCrest + (((nq3 * s + nq2) * s + nq1) * s + nq0) * sj;
    },
  };
}

/** Averages at every knot by quadrature, turned into the cells' polynomials. */
function fillCells(law: SmoothLaw, crest: Axis, peak: Axis): Float64Array {
  const rows = crest.knots.length;
  const columns = peak.knots.length;
  const nodes = new Float64Array(rows * columns * 8);
  const out = new Float64Array(10);
  const work = new Float64Array(4);
  for (let j = 0; j < columns; j++) {
    const a = peak.knots[j] as number;
    const count = nodesFor(a, law.scaleVolts);
    for (let i = 0; i < rows; i++) {
      averageAtNodes(law, (crest.knots[i] as number) - a, a, count, out, work);
      const o = (i * columns + j) * 8;
      // at a held crest, a change of a takes x down with it
      nodes[o] = out[MEAN] as number;
      nodes[o + 1] = out[MEAN_BY_X] as number;
      nodes[o + 2] = (out[MEAN_BY_A] as number) - (out[MEAN_BY_X] as number);
      nodes[o + 3] = (out[MEAN_BY_XA] as number) - (out[MEAN_BY_XX] as number);
      nodes[o + 4] = out[CHORD] as number;
      nodes[o + 5] = out[CHORD_BY_X] as number;
      nodes[o + 6] = (out[CHORD_BY_A] as number) - (out[CHORD_BY_X] as number);
      nodes[o + 7] = (out[CHORD_BY_XA] as number) - (out[CHORD_BY_XX] as number);
    }
  }
  const cells = new Float64Array((rows - 1) * (columns - 1) * CELL);
  const corner = new Float64Array(16);
  for (let i = 0; i < rows - 1; i++) {
    for (let j = 0; j < columns - 1; j++) {
      const hs = 1 / (crest.inverse[i] as number);
      const ht = 1 / (peak.inverse[j] as number);
      for (let f = 0; f < 2; f++) {
        for (let c = 0; c < 4; c++) {
          const o = ((i + (c >> 1)) * columns + j + (c & 1)) * 8 + 4 * f;
          corner[c] = nodes[o] as number;
          corner[4 + c] = (nodes[o + 1] as number) * hs;
          corner[8 + c] = (nodes[o + 2] as number) * ht;
          corner[12 + c] = (nodes[o + 3] as number) * hs * ht;
        }
        hermiteToPolynomial(corner, cells, (i * (columns - 1) + j) * CELL + f);
      }
    }
  }
  return cells;
}

/** Cubic through values and slopes at both ends, as powers: c0, c1, c2, c3. */
function cubic(f0: number, f1: number, d0: number, d1: number): [number, number, number, number] {
  return [f0, d0, 3 * (f1 - f0) - 2 * d0 - d1, 2 * (f0 - f1) + d0 + d1];
}

/** Bicubic Hermite patch (values, s-slopes, t-slopes, mixed, each at corners 00 01 10 11) to 16 coefficients s^i·t^j. */
function hermiteToPolynomial(corner: Float64Array, cells: Float64Array, at: number): void {
  const q = (k: number): number => corner[k] as number;
  // along t first, at s = 0 and s = 1, for the value and for the s-slope
  const value0 = cubic(q(0), q(1), q(8), q(9));
  const value1 = cubic(q(2), q(3), q(10), q(11));
  const slope0 = cubic(q(4), q(5), q(12), q(13));
  const slope1 = cubic(q(6), q(7), q(14), q(15));
  for (let j = 0; j < 4; j++) {
    const along = cubic(value0[j] as number, value1[j] as number, slope0[j] as number, slope1[j] as number);
    for (let i = 0; i < 4; i++) cells[at + 2 * (4 * i + j)] = along[i] as number;
  }
}
