import { CHORD, CHORD_BY_A, CHORD_BY_X, type CycleLaw, MEAN, MEAN_BY_A, MEAN_BY_X } from '../tubes/cycle-average.ts';
import { PLATE_KNEE_VOLTS } from '../tubes/tube.ts';
import {
  type CarrierPath,
  GRID_BY_GRID,
  GRID_BY_TUBE,
  GRID_RATIO,
  TUBE_BY_GRID,
  TUBE_BY_TUBE,
  TUBE_RATIO,
} from './carrier-path.ts';

/** The averaged laws of a grid-leak stage, tube or textbook. */
export interface StageLaws {
  /** Grid current against grid volts and grid carrier. */
  readonly grid: CycleLaw;
  /** Cathode current against u = v + v_p/mu + phi and the carrier of U1. */
  readonly cathode: CycleLaw;
  readonly mu: number;
  readonly phi: number;
  /** Whether the plate current dies at zero plate volts (the tube's law) or is straight (textbook). */
  readonly knee: boolean;
  /** Straight plate only: conductance besides that of u, S, about `restPlateVolts`. */
  readonly extraPlateSiemens: number;
  readonly restPlateVolts: number;
}

/** What the stage draws at one instant, and how that moves. Currents A, slopes S; `by…Envelope` per volt of peak. */
export interface StageCurrents {
  gridAmps: number;
  plateAmps: number;
  gridByGrid: number;
  gridByPlate: number;
  gridByEnvelope: number;
  plateByGrid: number;
  plateByPlate: number;
  plateByEnvelope: number;
  /** Peak carrier on the grid and of U1, V. */
  gridCarrierPeak: number;
  tubeCarrierPeak: number;
  /** Chord conductances, S (the cathode's with the knee in it). */
  gridChord: number;
  tubeChord: number;
  /** Slopes of the two chords by grid volts, plate volts and the envelope, the amplitudes following, S/V. */
  gridChordBy: [number, number, number];
  tubeChordBy: [number, number, number];
  /** Slopes with the carrier amplitudes held, as the rest record quotes them, S. */
  heldGridByGrid: number;
  heldPlateByGrid: number;
  heldPlateByPlate: number;
}

export function emptyCurrents(): StageCurrents {
  return {
    gridAmps: 0,
    plateAmps: 0,
    gridByGrid: 0,
    gridByPlate: 0,
    gridByEnvelope: 0,
    plateByGrid: 0,
    plateByPlate: 0,
    plateByEnvelope: 0,
    gridCarrierPeak: 0,
    tubeCarrierPeak: 0,
    gridChord: 0,
    tubeChord: 0,
    gridChordBy: [0, 0, 0],
    tubeChordBy: [0, 0, 0],
    heldGridByGrid: 0,
    heldPlateByGrid: 0,
    heldPlateByPlate: 0,
  };
}

/**
 * The averaged currents of a grid-leak stage at one slow state, the carrier's amplitudes at grid and tube solved with
 * them (two equations, Newton), and the slopes with the amplitudes following.
 */
export class Stage {
  private readonly laws: StageLaws;
  private readonly path: CarrierPath;
  private readonly g = new Float64Array(6);
  private readonly k = new Float64Array(6);
  private readonly t = new Float64Array(6);
  private gridPeak = 0;
  private tubePeak = 0;

  constructor(laws: StageLaws, path: CarrierPath) {
    this.laws = laws;
    this.path = path;
  }

  /**
   * @param gridVolts     slow grid voltage, V
   * @param plateVolts    slow plate voltage, V
   * @param envelopePeak  carrier's peak at the tuned circuit, V, 0 or more
   * @returns             false when the amplitudes did not settle (never seen; the caller then refuses)
   */
  evaluate(gridVolts: number, plateVolts: number, envelopePeak: number, out: StageCurrents): boolean {
    const { laws, path, g, k, t } = this;
    const { mu } = laws;
    const x = plateVolts / PLATE_KNEE_VOLTS;
    const knee = !laws.knee ? 1 : plateVolts > 0 ? Math.tanh(x) : 0;
    const kneeSlope = laws.knee && plateVolts > 0 ? (1 - knee * knee) / PLATE_KNEE_VOLTS : 0;
    const u = gridVolts + plateVolts / mu + laws.phi;
    // start from the last solution: callers walk along a waveform or a sweep
    let ag = Math.min(Math.max(this.gridPeak, 0.2 * envelopePeak), 2 * envelopePeak);
    let au = Math.min(Math.max(this.tubePeak, 0.02 * envelopePeak), 2 * envelopePeak);
    let settled = false;
    let m11 = 1;
    let m12 = 0;
    let m21 = 0;
    let m22 = 1;
    for (let pass = 0; pass < 60; pass++) {
      laws.grid.average(gridVolts, ag, g);
      laws.cathode.average(u, au, k);
      path.ratios(g[CHORD] as number, knee * (k[CHORD] as number), t);
      const rg = (t[GRID_RATIO] as number) * envelopePeak;
      const ru = (t[TUBE_RATIO] as number) * envelopePeak;
      const cga = g[CHORD_BY_A] as number;
      const cka = knee * (k[CHORD_BY_A] as number);
      m11 = 1 - rg * (t[GRID_BY_GRID] as number) * cga;
      m12 = -rg * (t[GRID_BY_TUBE] as number) * cka;
      m21 = -ru * (t[TUBE_BY_GRID] as number) * cga;
      m22 = 1 - ru * (t[TUBE_BY_TUBE] as number) * cka;
      let fg = ag - rg;
      const fu = au - ru;
      if (settled) break;
      if (ag > 2 * rg) {
        // far up an exponential a plain pass comes down one e-fold at a time; logarithms of the two come down at once
        const share = rg > 0 ? ag / rg : 1;
        fg = ag * Math.log(share);
        m11 = 1 + (m11 - 1) * share;
        m12 *= share;
      }
      const det = m11 * m22 - m12 * m21;
      let dg = (m22 * fg - m12 * fu) / det;
      let du = (m11 * fu - m21 * fg) / det;
      if (!(det > 0)) {
        // outside Newton's reach: plain substitution, halved
        dg = 0.5 * fg;
        du = 0.5 * fu;
      }
      ag = Math.max(ag - dg, 0.1 * ag);
      au = Math.max(au - du, 0.1 * au);
      settled = Math.abs(dg) <= 1e-13 * (1e-3 + ag) && Math.abs(du) <= 1e-13 * (1e-3 + au);
    }
    this.gridPeak = ag;
    this.tubePeak = au;
    // slopes of the amplitudes: M·[da_g, da_u] = right-hand sides for a move of v, v_p and the envelope
    const rg = (t[GRID_RATIO] as number) * envelopePeak;
    const ru = (t[TUBE_RATIO] as number) * envelopePeak;
    const det = m11 * m22 - m12 * m21;
    const cgx = g[CHORD_BY_X] as number;
    const ckx = knee * (k[CHORD_BY_X] as number);
    const chordByV = [cgx, 0, 0];
    const tubeByV = [ckx, ckx / mu + kneeSlope * (k[CHORD] as number), 0];
    const drive = [0, 0, 1];
    const cathodeMean = k[MEAN] as number;
    const currents: [number, number][] = [];
    for (let j = 0; j < 3; j++) {
      const pg = chordByV[j] as number;
      const pk = tubeByV[j] as number;
      const e = drive[j] as number;
      const bg =
        (t[GRID_RATIO] as number) * e + rg * ((t[GRID_BY_GRID] as number) * pg + (t[GRID_BY_TUBE] as number) * pk);
      const bu =
        (t[TUBE_RATIO] as number) * e + ru * ((t[TUBE_BY_GRID] as number) * pg + (t[TUBE_BY_TUBE] as number) * pk);
      const dag = (m22 * bg - m12 * bu) / det;
      const dau = (m11 * bu - m21 * bg) / det;
      const di = (j === 0 ? (g[MEAN_BY_X] as number) : 0) + (g[MEAN_BY_A] as number) * dag;
      const held =
        j === 0
          ? knee * (k[MEAN_BY_X] as number)
          : j === 1
            ? (knee * (k[MEAN_BY_X] as number)) / mu + kneeSlope * cathodeMean + laws.extraPlateSiemens
            : 0;
      out.gridChordBy[j] = pg + (g[CHORD_BY_A] as number) * dag;
      out.tubeChordBy[j] = pk + knee * (k[CHORD_BY_A] as number) * dau;
      currents.push([di, held + knee * (k[MEAN_BY_A] as number) * dau - di]);
    }
    const gridMean = g[MEAN] as number;
    out.gridAmps = gridMean;
    out.plateAmps = knee * cathodeMean - gridMean + laws.extraPlateSiemens * (plateVolts - laws.restPlateVolts);
    [out.gridByGrid, out.plateByGrid] = currents[0] as [number, number];
    [out.gridByPlate, out.plateByPlate] = currents[1] as [number, number];
    [out.gridByEnvelope, out.plateByEnvelope] = currents[2] as [number, number];
    out.gridCarrierPeak = ag;
    out.tubeCarrierPeak = au;
    out.gridChord = g[CHORD] as number;
    out.tubeChord = knee * (k[CHORD] as number);
    out.heldGridByGrid = g[MEAN_BY_X] as number;
    out.heldPlateByGrid = knee * (k[MEAN_BY_X] as number) - (g[MEAN_BY_X] as number);
    out.heldPlateByPlate = (knee * (k[MEAN_BY_X] as number)) / mu + kneeSlope * cathodeMean + laws.extraPlateSiemens;
    return settled;
  }
}
