import { directAverage, linearRectifierCycleLaw, squareCycleLaw, straightCycleLaw } from '../tubes/cycle-average.ts';
import { seriesDiodeLaw } from '../tubes/diode-law.ts';
import { type SmoothLaw, softKneeLaw } from '../tubes/smooth-law.ts';
import type { TubeLaw } from '../tubes/tube.ts';
import type { DetectorCircuit } from './circuit.ts';
import type { StageLaws } from './stage-currents.ts';

/** Grid and cathode laws of a tube as smooth laws of one voltage each. */
export function smoothLaws(law: TubeLaw): { grid: SmoothLaw; cathode: SmoothLaw } {
  return { grid: softKneeLaw(law.Gg, law.Cg, law.xi), cathode: softKneeLaw(law.G, law.C, law.gamma) };
}

/** Laws of a detector's two ports before averaging: those of its tube, or of its diode and an idle port. */
export function portLaws(circuit: DetectorCircuit): { grid: SmoothLaw; cathode: SmoothLaw } {
  const { diode } = circuit.detector;
  if (!diode) return smoothLaws(circuit.tube.law);
  const { law } = diode;
  const grid =
    law.kind === '3/2'
      ? softKneeLaw(law.perveance, law.sharpness, 1.5)
      : seriesDiodeLaw(law.saturationAmps, law.idealityVolts, law.seriesOhms);
  return { grid, cathode: softKneeLaw(0, 1, 1.5) };
}

/** The averaged laws of a detector, by direct quadrature. */
export function detectorStageLaws(circuit: DetectorCircuit): StageLaws {
  if (!circuit.detector.diode) return tubeStageLaws(circuit.tube.law);
  const { grid, cathode } = portLaws(circuit);
  return {
    grid: directAverage(grid),
    cathode: directAverage(cathode),
    mu: 1,
    phi: 0,
    knee: true,
    extraPlateSiemens: 0,
    restPlateVolts: 0,
  };
}

/** The tube's own laws, averaged by direct quadrature. */
export function tubeStageLaws(law: TubeLaw): StageLaws {
  const { grid, cathode } = smoothLaws(law);
  return {
    grid: directAverage(grid),
    cathode: directAverage(cathode),
    mu: law.mu,
    phi: law.phi,
    knee: true,
    extraPlateSiemens: 0,
    restPlateVolts: 0,
  };
}

/** The rest point without carrier, as the textbook laws take it from the tube. */
export interface QuietPoint {
  readonly gridVolts: number;
  readonly plateVolts: number;
  /** Cathode current times knee, A, and its slope in u, S. */
  readonly cathodeAmps: number;
  readonly cathodeSiemens: number;
  /** Conductance the knee adds at low plate volts, S. */
  readonly kneeSiemens: number;
}

/** A plate stage made straight about a rest point of the tube. */
export function straightPlate(law: TubeLaw, at: QuietPoint): Omit<StageLaws, 'grid'> {
  const u = at.gridVolts + at.plateVolts / law.mu + law.phi;
  return {
    cathode: straightCycleLaw(u, at.cathodeAmps, at.cathodeSiemens),
    mu: law.mu,
    phi: law.phi,
    knee: false,
    extraPlateSiemens: at.kneeSiemens,
    restPlateVolts: at.plateVolts,
  };
}

/** Textbook square law about the tube's no-signal grid point: k is a quarter of the grid current's curvature there. */
export function squareGrid(law: TubeLaw, gridVolts: number): StageLaws['grid'] {
  const out = new Float64Array(4);
  smoothLaws(law).grid.evaluate(gridVolts, out);
  return squareCycleLaw(gridVolts, out[0] as number, out[1] as number, 0.25 * (out[2] as number));
}

/** Textbook linear rectifier; the charge resistance is leak / 1000 unless given. */
export function linearGrid(circuit: DetectorCircuit): StageLaws['grid'] {
  return linearRectifierCycleLaw(circuit.detector.chargeOhms ?? circuit.detector.leakOhms / 1000);
}
