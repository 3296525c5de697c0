import { type Complex, complex, magnitude, minus, over, plus, scaled, times } from './complex.ts';
import type { CarrierAdmittances } from './grid-leak.ts';

export const GRID_RATIO = 0;
export const TUBE_RATIO = 1;
export const GRID_BY_GRID = 2;
export const GRID_BY_TUBE = 3;
export const TUBE_BY_GRID = 4;
export const TUBE_BY_TUBE = 5;

/**
 * The carrier's way from the tuned circuit to the grid and the plate, given the two chord conductances of the tube:
 * g (grid current over grid carrier) and k (plate-side cathode current over the carrier of U1 = V_g + V_p/mu).
 *
 *   (grid + g)·V_g − gp·V_p = series·E ,   (k − g − gp)·V_g + (plate + k/mu)·V_p = 0
 *
 * With D the determinant, V_g/E = series·(plate + k/mu)/D and U1/E = series·(plate + (gp + g)/mu)/D;
 * D is linear in g and in k, so every slope below is exact.
 */
export class CarrierPath {
  private readonly a: CarrierAdmittances;
  private readonly mu: number;
  /** The same numbers as plain fields, for the renderer's loop: 1/mu, grid, grid-plate, plate, η at g = 0, |series|, series. */
  private readonly c: Float64Array;

  constructor(admittances: CarrierAdmittances, mu: number) {
    this.a = admittances;
    this.mu = mu;
    const { series, grid, gridPlate, plate } = admittances;
    this.c = Float64Array.of(
      1 / mu,
      grid.re,
      grid.im,
      gridPlate.re,
      gridPlate.im,
      plate.re,
      plate.im,
      plate.re + gridPlate.re / mu,
      plate.im + gridPlate.im / mu,
      magnitude(series),
      series.re,
      series.im,
    );
  }

  /** The constants of the path as one run of twelve numbers, for the kernel. */
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
    const perMu = c[0] as number;
    const gpRe = c[3] as number;
    const gpIm = c[4] as number;
    const alphaRe = (c[1] as number) + g;
    const alphaIm = c[2] as number;
    const betaRe = (c[5] as number) + k * perMu;
    const betaIm = c[6] as number;
    const etaRe = (c[7] as number) + g * perMu;
    const etaIm = c[8] as number;
    const series = c[9] as number;
    const gammaRe = k - g - gpRe;
    const detRe = alphaRe * betaRe - alphaIm * betaIm + gpRe * gammaRe + gpIm * gpIm;
    const detIm = alphaRe * betaIm + alphaIm * betaRe - gpRe * gpIm + gpIm * gammaRe;
    const det2 = 1 / (detRe * detRe + detIm * detIm);
    const beta2 = betaRe * betaRe + betaIm * betaIm;
    const eta2 = etaRe * etaRe + etaIm * etaIm;
    out[GRID_RATIO] = series * Math.sqrt(beta2 * det2);
    out[TUBE_RATIO] = series * Math.sqrt(eta2 * det2);
    // ∂D/∂g = plate + k/mu − gp ; ∂D/∂k = (grid + g)/mu + gp
    const byG = ((betaRe - gpRe) * detRe + (betaIm - gpIm) * detIm) * det2;
    const byK = ((alphaRe * perMu + gpRe) * detRe + (alphaIm * perMu + gpIm) * detIm) * det2;
    out[GRID_BY_GRID] = -byG;
    out[GRID_BY_TUBE] = (betaRe * perMu) / beta2 - byK;
    out[TUBE_BY_GRID] = (etaRe * perMu) / eta2 - byG;
    out[TUBE_BY_TUBE] = -byK;
  }

  /** Only |V_g/E| and |U1/E|, into `out[0..1]`, for g = `chords[0]`, k = `chords[1]`. */
  levelsAt(chords: Float64Array, out: Float64Array): void {
    const g = chords[0] as number;
    const k = chords[1] as number;
    const c = this.c;
    const perMu = c[0] as number;
    const gpRe = c[3] as number;
    const gpIm = c[4] as number;
    const alphaRe = (c[1] as number) + g;
    const alphaIm = c[2] as number;
    const betaRe = (c[5] as number) + k * perMu;
    const betaIm = c[6] as number;
    const etaRe = (c[7] as number) + g * perMu;
    const etaIm = c[8] as number;
    const gammaRe = k - g - gpRe;
    const detRe = alphaRe * betaRe - alphaIm * betaIm + gpRe * gammaRe + gpIm * gpIm;
    const detIm = alphaRe * betaIm + alphaIm * betaRe - gpRe * gpIm + gpIm * gammaRe;
    const scale = (c[9] as number) / Math.sqrt(detRe * detRe + detIm * detIm);
    out[GRID_RATIO] = scale * Math.sqrt(betaRe * betaRe + betaIm * betaIm);
    out[TUBE_RATIO] = scale * Math.sqrt(etaRe * etaRe + etaIm * etaIm);
  }

  /** Complex ratios V_g/E and V_p/E, and the admittance the stage shows to the tuned circuit, S. */
  phasors(g: number, k: number): { grid: Complex; plate: Complex; input: Complex } {
    const { series, grid, gridPlate, plate } = this.a;
    const alpha = plus(grid, complex(g));
    const beta = plus(plate, complex(k / this.mu));
    const gamma = minus(complex(k - g), gridPlate);
    const det = plus(times(alpha, beta), times(gridPlate, gamma));
    const gridRatio = over(times(series, beta), det);
    const plateRatio = scaled(over(times(series, gamma), det), -1);
    return { grid: gridRatio, plate: plateRatio, input: times(series, minus(complex(1), gridRatio)) };
  }

  /** The admittance shown to the tuned circuit and its slopes by the two chords, S and no unit. */
  inputSlopes(g: number, k: number): { input: Complex; byGrid: Complex; byTube: Complex } {
    const { series, grid, gridPlate, plate } = this.a;
    const alpha = plus(grid, complex(g));
    const beta = plus(plate, complex(k / this.mu));
    const det = plus(times(alpha, beta), times(gridPlate, minus(complex(k - g), gridPlate)));
    const ratio = over(times(series, beta), det);
    const detByTube = plus(scaled(alpha, 1 / this.mu), gridPlate);
    const ratioByGrid = scaled(over(times(ratio, minus(beta, gridPlate)), det), -1);
    const ratioByTube = over(minus(scaled(series, 1 / this.mu), times(ratio, detByTube)), det);
    return {
      input: times(series, minus(complex(1), ratio)),
      byGrid: scaled(times(series, ratioByGrid), -1),
      byTube: scaled(times(series, ratioByTube), -1),
    };
  }

  /** The admittance shown to the tuned circuit for g = `chords[0]`, k = `chords[1]`, into `out[0..1]`, taking no memory. */
  inputAt(chords: Float64Array, out: Float64Array): void {
    const g = chords[0] as number;
    const k = chords[1] as number;
    const c = this.c;
    const perMu = c[0] as number;
    const gpRe = c[3] as number;
    const gpIm = c[4] as number;
    const alphaRe = (c[1] as number) + g;
    const alphaIm = c[2] as number;
    const betaRe = (c[5] as number) + k * perMu;
    const betaIm = c[6] as number;
    const gammaRe = k - g - gpRe;
    const detRe = alphaRe * betaRe - alphaIm * betaIm + gpRe * gammaRe + gpIm * gpIm;
    const detIm = alphaRe * betaIm + alphaIm * betaRe - gpRe * gpIm + gpIm * gammaRe;
    const sRe = c[10] as number;
    const sIm = c[11] as number;
    // series·(1 − series·β/D)
    const bRe = sRe * betaRe - sIm * betaIm;
    const bIm = sRe * betaIm + sIm * betaRe;
    const scale = 1 / (detRe * detRe + detIm * detIm);
    const leftRe = 1 - (bRe * detRe + bIm * detIm) * scale;
    const leftIm = -(bIm * detRe - bRe * detIm) * scale;
    out[0] = sRe * leftRe - sIm * leftIm;
    out[1] = sRe * leftIm + sIm * leftRe;
  }
}
