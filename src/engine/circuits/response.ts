import { type Complex, complex, magnitude, over, plus, scaled } from './complex.ts';
import { solveComplex } from './dense-solve.ts';
import { detectorAudio } from './detector-network.ts';
import type { AudioStage } from './grid-leak.ts';
import type { IdealParts } from './plate-network.ts';
import type { RestPoint } from './rest-point.ts';

/** Frequency to which responses are referred, Hz. */
export const REFERENCE_HERTZ = 400;

/** Small modulation at one frequency: complex volts per unit of modulation depth (peak volts at 100 %). */
export interface ModulationResponse {
  readonly output: Complex;
  readonly grid: Complex;
  readonly plate: Complex;
}

/**
 * The tuned circuit's effect on the envelope at one audio frequency, re the carrier itself:
 * half the upper sideband plus half the conjugate of the lower, each through 1/(1 + j·2Q(f + δ)/f0).
 */
export function envelopeTransfer(hertz: number, carrierHertz: number, loadedQ: number, detuneHertz: number): Complex {
  const pole = (offset: number): Complex => complex(1, (2 * loadedQ * offset) / carrierHertz);
  const carrier = pole(detuneHertz);
  const upper = over(carrier, pole(detuneHertz + hertz));
  const lower = over(carrier, pole(detuneHertz - hertz));
  return scaled(plus(upper, complex(lower.re, -lower.im)), 0.5);
}

/**
 * The averaged equations linearised at a rest point, solved exactly in frequency. Carrier amplitudes at grid and
 * plate follow the slow voltages, so a small bypass acts on audio and carrier as it does in life.
 */
export class LinearResponse {
  private readonly rest: RestPoint;
  private readonly stage: AudioStage;
  private readonly tunedIdeal: boolean;

  /** @param ideal  parts taken as ideal for audio, the rest point and the carrier held */
  constructor(rest: RestPoint, ideal: IdealParts & { readonly tunedCircuit?: boolean } = {}) {
    this.rest = rest;
    this.stage = detectorAudio(rest.circuit, ideal);
    this.tunedIdeal = ideal.tunedCircuit === true;
  }

  /** Response at one frequency, Hz, above 0. */
  at(hertz: number): ModulationResponse {
    const { rest, stage } = this;
    const { currents, tuned, circuit } = rest;
    const { system, gridNode: g, plateNode: p, output } = stage;
    const tank = this.tunedIdeal ? null : tuned.tank;
    const n = system.size;
    // with a coil, the envelope's two parts stand behind the network's own unknowns
    const size = tank ? n + 2 : n;
    const re = widened(system.conductance, n, size);
    const im = widened(system.storage, n, size).map((value) => value * 2 * Math.PI * hertz);
    const add = (row: number, col: number, value: number): void => {
      re[row * size + col] = (re[row * size + col] as number) + value;
    };
    add(g, g, currents.gridByGrid);
    add(g, p, currents.gridByPlate);
    add(p, g, currents.plateByGrid);
    add(p, p, currents.plateByPlate);
    const x = new Float64Array(2 * size);
    const peak = tuned.carrierPeakVolts;
    if (tank) {
      const real = n;
      const imaginary = n + 1;
      add(g, real, currents.gridByEnvelope * peak);
      add(p, real, currents.plateByEnvelope * peak);
      const omega = 2 * Math.PI * hertz;
      im[real * size + real] = omega;
      im[imaginary * size + imaginary] = omega;
      add(real, real, -tank.pole.re);
      add(real, imaginary, tank.pole.im);
      add(imaginary, real, -tank.pole.im);
      add(imaginary, imaginary, -tank.pole.re);
      const { byGrid, byTube } = rest.path.inputSlopes(currents.gridChord, currents.tubeChord);
      [g, p, real].forEach((column, k) => {
        const volts = (k === 2 ? peak : 1) * tank.perSiemensSecond;
        const gridChord = volts * (currents.gridChordBy[k] as number);
        const tubeChord = volts * (currents.tubeChordBy[k] as number);
        add(real, column, byGrid.re * gridChord + byTube.re * tubeChord);
        add(imaginary, column, byGrid.im * gridChord + byTube.im * tubeChord);
      });
      x[real] = -tank.pole.re;
      x[imaginary] = -tank.pole.im;
    } else {
      const envelope = this.tunedIdeal
        ? complex(1)
        : envelopeTransfer(hertz, circuit.station.carrierHertz, tuned.loadedQ, tuned.detuneHertz);
      const drive = scaled(envelope, peak);
      x[g] = -currents.gridByEnvelope * drive.re;
      x[size + g] = -currents.gridByEnvelope * drive.im;
      x[p] = -currents.plateByEnvelope * drive.re;
      x[size + p] = -currents.plateByEnvelope * drive.im;
    }
    solveComplex(re, im, size, x);
    const read = (row: number): Complex => complex(x[row] as number, x[size + row] as number);
    return { output: scaled(read(output.index), output.weight), grid: read(g), plate: read(p) };
  }

  /** Level at one frequency re 400 Hz, dB; very low, not −∞, for no output at all. */
  decibels(hertz: number, reference = magnitude(this.at(REFERENCE_HERTZ).output)): number {
    return ratioDecibels(magnitude(this.at(hertz).output), reference);
  }
}

/** A square matrix in the upper left corner of a larger one of zeros. */
function widened(matrix: Float64Array, n: number, size: number): Float64Array {
  if (size === n) return matrix.slice();
  const out = new Float64Array(size * size);
  for (let r = 0; r < n; r++) out.set(matrix.subarray(r * n, (r + 1) * n), r * size);
  return out;
}

/** 20·log10 of a ratio, held above −400 dB so that silence stays a number. */
export function ratioDecibels(value: number, reference: number): number {
  if (!(reference > 0)) return 0;
  return 20 * Math.log10(Math.max(value / reference, 1e-20));
}

/**
 * Gain from grid to plate of the stage as an amplifier at one frequency, the carrier amplitudes held: complex volts a volt.
 */
export function amplifierGain(rest: RestPoint, hertz: number): Complex {
  const { system, gridNode: g, plateNode: p } = rest.audio;
  const n = system.size;
  const re = system.conductance.slice();
  const im = system.storage.map((farads) => farads * 2 * Math.PI * hertz);
  re[p * n + p] = (re[p * n + p] as number) + rest.currents.heldPlateByPlate;
  re[p * n + g] = (re[p * n + g] as number) + rest.currents.heldPlateByGrid;
  // the grid held at one volt: its node equation is replaced
  for (let c = 0; c < n; c++) {
    re[g * n + c] = c === g ? 1 : 0;
    im[g * n + c] = 0;
  }
  const x = new Float64Array(2 * n);
  x[g] = 1;
  solveComplex(re, im, n, x);
  return complex(x[p] as number, x[n + p] as number);
}

/** Level that is half the power, dB. */
export const HALF_POWER_DECIBELS = 10 * Math.log10(0.5);

/**
 * The half-power corners re 400 Hz: the first crossing above 400 Hz up to 16 kHz, and below it down to 1 Hz;
 * null where the response does not fall that far.
 */
export function corners(response: LinearResponse): { lowHertz: number | null; highHertz: number | null } {
  const reference = magnitude(response.at(REFERENCE_HERTZ).output);
  const below = (hertz: number): boolean => response.decibels(hertz, reference) < HALF_POWER_DECIBELS;
  return {
    lowHertz: firstCrossing(below, REFERENCE_HERTZ, 1),
    highHertz: firstCrossing(below, REFERENCE_HERTZ, 16000),
  };
}

/** Walks from one frequency to another in 1/12 octaves and bisects the first interval where `below` turns true. */
function firstCrossing(below: (hertz: number) => boolean, from: number, to: number): number | null {
  const count = Math.ceil(12 * Math.abs(Math.log2(to / from)));
  const ratio = (to / from) ** (1 / count);
  let inside = from;
  for (let k = 1; k <= count; k++) {
    const hertz = k === count ? to : from * ratio ** k;
    if (below(hertz)) {
      let outside = hertz;
      for (let halving = 0; halving < 60; halving++) {
        const middle = Math.sqrt(inside * outside);
        if (below(middle)) outside = middle;
        else inside = middle;
      }
      return Math.sqrt(inside * outside);
    }
    inside = hertz;
  }
  return null;
}
