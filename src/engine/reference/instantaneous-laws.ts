import { PLATE_KNEE_VOLTS, type Tube } from '../tubes/tube.ts';

/** Grid current as a function of grid volts v: the tube's own, or a textbook law. */
export type GridLaw =
  | { readonly law: 'tube' }
  /** i = currentAmps · exp(v / efoldVolts) − lessAmps */
  | {
      readonly law: 'exponential';
      readonly currentAmps: number;
      readonly efoldVolts: number;
      readonly lessAmps?: number;
    }
  /** i = perveance · (ln(1 + exp(sharpness·v)) / sharpness)^1.5 */
  | { readonly law: '3/2'; readonly perveance: number; readonly sharpness: number }
  /** i = v / chargeOhms above 0, none below */
  | { readonly law: 'rectifier'; readonly chargeOhms: number }
  /** i = restAmps + siemens · d + curvature · d², d = v − restVolts */
  | {
      readonly law: 'quadratic';
      readonly restVolts: number;
      readonly restAmps: number;
      readonly siemens: number;
      readonly curvature: number;
    };

/** Plate current: the tube's own, a cathode current straight about a rest point less the grid's share, or none at all. */
export type PlateLaw =
  | { readonly law: 'tube' }
  /** i = restAmps + gm · (v − gridVolts) + gp · (vp − plateVolts) − grid current */
  | {
      readonly law: 'straight';
      readonly restAmps: number;
      readonly gridVolts: number;
      readonly plateVolts: number;
      readonly gmSiemens: number;
      readonly gpSiemens: number;
    }
  | { readonly law: 'none' };

/** Laws used in place of the tube's own. */
export interface StageLaws {
  readonly grid?: GridLaw;
  readonly plate?: PlateLaw;
}

export const GRID_TUBE = 0;
export const GRID_EXPONENTIAL = 1;
export const GRID_RECTIFIER = 2;
export const GRID_QUADRATIC = 3;
export const PLATE_TUBE = 0;
export const PLATE_STRAIGHT = 1;
export const PLATE_NONE = 2;

/** Laws as bare numbers, so that the loop reads them without looking up names. */
export interface PackedLaws {
  readonly gridCode: number;
  /** tube: G, C, xi, 0 — exponential: I0, 1/VT — rectifier: 1/R — quadratic: i0, g, k2, v0 */
  readonly grid: Float64Array;
  readonly plateCode: number;
  /** tube: G, C, gamma, 1/mu, phi, knee volts — straight: constant, gm, gp */
  readonly plate: Float64Array;
}

/** Packs the tube's laws, or those that stand in for them. */
export function packLaws(tube: Tube, stage: StageLaws = {}): PackedLaws {
  const { law } = tube;
  const g = stage.grid ?? { law: 'tube' };
  const p = stage.plate ?? { law: 'tube' };
  const grid = new Float64Array(4);
  const plate = new Float64Array(6);
  let gridCode = GRID_TUBE;
  let plateCode = PLATE_TUBE;
  if (g.law === 'tube') grid.set([law.Gg, law.Cg, law.xi]);
  else if (g.law === 'exponential') {
    gridCode = GRID_EXPONENTIAL;
    grid.set([g.currentAmps, 1 / g.efoldVolts, g.lessAmps ?? 0]);
  } else if (g.law === '3/2') {
    grid.set([g.perveance, g.sharpness, 1.5]);
  } else if (g.law === 'rectifier') {
    gridCode = GRID_RECTIFIER;
    grid[0] = 1 / g.chargeOhms;
  } else {
    gridCode = GRID_QUADRATIC;
    grid.set([g.restAmps, g.siemens, g.curvature, g.restVolts]);
  }
  if (p.law === 'tube') plate.set([law.G, law.C, law.gamma, 1 / law.mu, law.phi, PLATE_KNEE_VOLTS]);
  else if (p.law === 'straight') {
    plateCode = PLATE_STRAIGHT;
    plate.set([p.restAmps - p.gmSiemens * p.gridVolts - p.gpSiemens * p.plateVolts, p.gmSiemens, p.gpSiemens]);
  } else plateCode = PLATE_NONE;
  return { gridCode, grid, plateCode, plate };
}
