import { type Complex, complex, minus, over, plus, scaled, times } from './complex.ts';

export const GRID_RATIO = 0;
export const TUBE_RATIO = 1;
export const GRID_BY_GRID = 2;
export const GRID_BY_TUBE = 3;
export const TUBE_BY_GRID = 4;
export const TUBE_BY_TUBE = 5;

/**
 * What the linear part of a stage does at the carrier, seen from the tube's two ports (grid and plate against cathode)
 * and from the tuned circuit that drives it with a peak E:
 *
 *   V_g = a1·E − z11·I_g − z12·I_p ,   V_p = a2·E − z21·I_g − z22·I_p ,   I_E = y·E + b1·I_g + b2·I_p
 *
 * I_g and I_p are drawn at the ports, I_E by the stage from the tuned circuit.
 */
export interface CarrierPorts {
  readonly a1: Complex;
  readonly a2: Complex;
  readonly z11: Complex;
  readonly z12: Complex;
  readonly z21: Complex;
  readonly z22: Complex;
  readonly y: Complex;
  readonly b1: Complex;
  readonly b2: Complex;
}

/**
 * The carrier's way from the tuned circuit to the tube, given the two chord conductances of the tube: g (grid current
 * over grid carrier) and k (cathode current over the carrier of U1 = V_g + V_p/mu; the plate draws it less the grid's).
 *
 * With these the ports' equations are two linear ones. Their determinant D = 1 + d1·g + d2·k + d3·g·k, and
 *
 *   V_g/E = (n0 + n1·k)/D ,   U1/E = (u0 + u1·g)/D ,   Y_in = y + (q1·g + q2·k + q3·g·k)/D ,
 *
 * so that every slope below is exact.
 */
export class CarrierPath {
  private readonly d1: Complex;
  private readonly d2: Complex;
  private readonly d3: Complex;
  private readonly n0: Complex;
  private readonly n1: Complex;
  private readonly u0: Complex;
  private readonly u1: Complex;
  private readonly y: Complex;
  private readonly q1: Complex;
  private readonly q2: Complex;
  private readonly q3: Complex;
  private readonly mu: number;
  private readonly c: Float64Array;

  constructor(ports: CarrierPorts, mu: number) {
    const { a1, a2, z11, z12, z21, z22, y, b1, b2 } = ports;
    this.mu = mu;
    const per = 1 / mu;
    this.d1 = minus(z11, z12);
    this.d2 = plus(z12, scaled(z22, per));
    this.d3 = scaled(minus(times(z11, z22), times(z12, z21)), per);
    this.n0 = a1;
    this.n1 = scaled(minus(times(a1, z22), times(a2, z12)), per);
    this.u0 = plus(a1, scaled(a2, per));
    this.u1 = scaled(minus(times(a2, minus(z11, z12)), times(a1, minus(z21, z22))), per);
    this.y = y;
    this.q1 = times(minus(b1, b2), this.n0);
    this.q2 = times(b2, this.u0);
    this.q3 = plus(times(minus(b1, b2), this.n1), times(b2, this.u1));
    this.c = Float64Array.of(
      ...[this.d1, this.d2, this.d3, this.n0, this.n1, this.u0, this.u1, this.q1, this.q2, this.q3, this.y].flatMap(
        ({ re, im }) => [re, im],
      ),
    );
  }

  /** Real and imaginary parts of d1, d2, d3, n0, n1, u0, u1, q1, q2, q3, y: 22 numbers, for the kernel. */
  get numbers(): Float64Array {
    return this.c;
  }

  /**
   * Writes into `out[0..5]`: |V_g/E|, |U1/E|, then the slopes of their logarithms:
   * ∂ln|V_g/E|/∂g, ∂ln|V_g/E|/∂k, ∂ln|U1/E|/∂g, ∂ln|U1/E|/∂k (1/S).
   */
  ratios(g: number, k: number, out: Float64Array): void {
    this.ratiosAt(Float64Array.of(g, k), out);
  }

  /** The same for g = `chords[0]`, k = `chords[1]`, taking no memory. */
  ratiosAt(chords: Float64Array, out: Float64Array): void {
    const g = chords[0] as number;
    const k = chords[1] as number;
    const c = this.c;
    const byGRe = (c[0] as number) + k * (c[4] as number);
    const byGIm = (c[1] as number) + k * (c[5] as number);
    const byKRe = (c[2] as number) + g * (c[4] as number);
    const byKIm = (c[3] as number) + g * (c[5] as number);
    const dRe = 1 + g * byGRe + k * (c[2] as number);
    const dIm = g * byGIm + k * (c[3] as number);
    const nRe = (c[6] as number) + k * (c[8] as number);
    const nIm = (c[7] as number) + k * (c[9] as number);
    const uRe = (c[10] as number) + g * (c[12] as number);
    const uIm = (c[11] as number) + g * (c[13] as number);
    const d2 = 1 / (dRe * dRe + dIm * dIm);
    const n2 = nRe * nRe + nIm * nIm;
    const u2 = uRe * uRe + uIm * uIm;
    out[GRID_RATIO] = Math.sqrt(n2 * d2);
    out[TUBE_RATIO] = Math.sqrt(u2 * d2);
    const byG = (byGRe * dRe + byGIm * dIm) * d2;
    const byK = (byKRe * dRe + byKIm * dIm) * d2;
    out[GRID_BY_GRID] = -byG;
    out[GRID_BY_TUBE] = (n2 > 0 ? ((c[8] as number) * nRe + (c[9] as number) * nIm) / n2 : 0) - byK;
    out[TUBE_BY_GRID] = (u2 > 0 ? ((c[12] as number) * uRe + (c[13] as number) * uIm) / u2 : 0) - byG;
    out[TUBE_BY_TUBE] = -byK;
  }

  /** Only |V_g/E| and |U1/E|, into `out[0..1]`, for g = `chords[0]`, k = `chords[1]`. */
  levelsAt(chords: Float64Array, out: Float64Array): void {
    const g = chords[0] as number;
    const k = chords[1] as number;
    const c = this.c;
    const dRe = 1 + g * ((c[0] as number) + k * (c[4] as number)) + k * (c[2] as number);
    const dIm = g * ((c[1] as number) + k * (c[5] as number)) + k * (c[3] as number);
    const nRe = (c[6] as number) + k * (c[8] as number);
    const nIm = (c[7] as number) + k * (c[9] as number);
    const uRe = (c[10] as number) + g * (c[12] as number);
    const uIm = (c[11] as number) + g * (c[13] as number);
    const scale = 1 / Math.sqrt(dRe * dRe + dIm * dIm);
    out[GRID_RATIO] = scale * Math.sqrt(nRe * nRe + nIm * nIm);
    out[TUBE_RATIO] = scale * Math.sqrt(uRe * uRe + uIm * uIm);
  }

  /** The admittance shown to the tuned circuit for g = `chords[0]`, k = `chords[1]`, into `out[0..1]`, taking no memory. */
  inputAt(chords: Float64Array, out: Float64Array): void {
    const g = chords[0] as number;
    const k = chords[1] as number;
    const c = this.c;
    const gk = g * k;
    const dRe = 1 + g * (c[0] as number) + k * (c[2] as number) + gk * (c[4] as number);
    const dIm = g * (c[1] as number) + k * (c[3] as number) + gk * (c[5] as number);
    const qRe = g * (c[14] as number) + k * (c[16] as number) + gk * (c[18] as number);
    const qIm = g * (c[15] as number) + k * (c[17] as number) + gk * (c[19] as number);
    const d2 = 1 / (dRe * dRe + dIm * dIm);
    out[0] = (c[20] as number) + (qRe * dRe + qIm * dIm) * d2;
    out[1] = (c[21] as number) + (qIm * dRe - qRe * dIm) * d2;
  }

  /**
   * How the admittance shown to the tuned circuit moves when the chords at `chords[from]` and the next move by dg and dk:
   * real and imaginary part into `out[to]` and the next, taking no memory.
   */
  inputMove(chords: Float64Array, from: number, dg: number, dk: number, out: Float64Array, to: number): void {
    const g = chords[from] as number;
    const k = chords[from + 1] as number;
    const c = this.c;
    const gk = g * k;
    // slopes of determinant and numerator along the move
    const sRe = dg * ((c[0] as number) + k * (c[4] as number)) + dk * ((c[2] as number) + g * (c[4] as number));
    const sIm = dg * ((c[1] as number) + k * (c[5] as number)) + dk * ((c[3] as number) + g * (c[5] as number));
    const tRe = dg * ((c[14] as number) + k * (c[18] as number)) + dk * ((c[16] as number) + g * (c[18] as number));
    const tIm = dg * ((c[15] as number) + k * (c[19] as number)) + dk * ((c[17] as number) + g * (c[19] as number));
    const dRe = 1 + g * (c[0] as number) + k * (c[2] as number) + gk * (c[4] as number);
    const dIm = g * (c[1] as number) + k * (c[3] as number) + gk * (c[5] as number);
    const qRe = g * (c[14] as number) + k * (c[16] as number) + gk * (c[18] as number);
    const qIm = g * (c[15] as number) + k * (c[17] as number) + gk * (c[19] as number);
    const d2 = 1 / (dRe * dRe + dIm * dIm);
    const yRe = (qRe * dRe + qIm * dIm) * d2;
    const yIm = (qIm * dRe - qRe * dIm) * d2;
    const re = tRe - yRe * sRe + yIm * sIm;
    const im = tIm - yRe * sIm - yIm * sRe;
    out[to] = (re * dRe + im * dIm) * d2;
    out[to + 1] = (im * dRe - re * dIm) * d2;
  }

  /** Complex ratios V_g/E and V_p/E, and the admittance the stage shows to the tuned circuit, S. */
  phasors(g: number, k: number): { grid: Complex; plate: Complex; input: Complex } {
    const d = this.determinant(g, k);
    const grid = over(plus(this.n0, scaled(this.n1, k)), d);
    const tube = over(plus(this.u0, scaled(this.u1, g)), d);
    return { grid, plate: scaled(minus(tube, grid), this.mu), input: this.inputSlopes(g, k).input };
  }

  /** The admittance shown to the tuned circuit, S, and its slopes by the two chords, no unit. */
  inputSlopes(g: number, k: number): { input: Complex; byGrid: Complex; byTube: Complex } {
    const d = this.determinant(g, k);
    const top = plus(plus(scaled(this.q1, g), scaled(this.q2, k)), scaled(this.q3, g * k));
    const share = over(top, d);
    const byGrid = minus(plus(this.q1, scaled(this.q3, k)), times(share, plus(this.d1, scaled(this.d3, k))));
    const byTube = minus(plus(this.q2, scaled(this.q3, g)), times(share, plus(this.d2, scaled(this.d3, g))));
    return { input: plus(this.y, share), byGrid: over(byGrid, d), byTube: over(byTube, d) };
  }

  private determinant(g: number, k: number): Complex {
    return plus(plus(complex(1), scaled(this.d1, g)), plus(scaled(this.d2, k), scaled(this.d3, g * k)));
  }
}
