import { InputError } from '../errors.ts';
import type { CoilCircuit, DetectorCircuit } from './circuit.ts';
import { type Complex, complex, magnitude, over } from './complex.ts';

/** The tuned circuit with the detector on it. */
export interface TunedState {
  /** Carrier's peak at the detector's input, V. */
  readonly carrierPeakVolts: number;
  readonly loadedQ: number;
  /** Station minus the resonance as it stands with the detector connected, Hz. */
  readonly detuneHertz: number;
  /** The detector's admittance at the rest point, S. */
  readonly input: Complex;
  /** How the coil follows an admittance that moves with the signal; null for a stiff source, which does not. */
  readonly tank: Tank | null;
}

/**
 * A coil as built, about the carrier: with E the complex envelope at the detector (1 at rest) and s the station's,
 *
 *   dE/dt = p·(E − s) − κ·(Y − Y_rest)·E ,   p = −(ω/2Q)·(1 + j2Qδ/f) ,   κ = ω²·L·tap²/2
 *
 * so that the detector damps and pulls its own coil through the modulation cycle, not at the rest point alone.
 */
export interface Tank {
  /** p, 1/s. */
  readonly pole: Complex;
  /** κ, 1/(S·s). */
  readonly perSiemensSecond: number;
}

function tankOf(tuned: CoilCircuit, hertz: number, loadedQ: number, detuneHertz: number): Tank {
  const omega = 2 * Math.PI * hertz;
  const rate = omega / (2 * loadedQ);
  return {
    pole: complex(-rate, (-rate * 2 * loadedQ * detuneHertz) / hertz),
    perSiemensSecond: (omega * omega * tuned.coilHenries * tuned.tap * tuned.tap) / 2,
  };
}

interface CoilOnLoad {
  readonly peak: number;
  readonly loadedQ: number;
  readonly detuneHertz: number;
}

/** What a coil does with a given admittance on its tap, for a given open-circuit peak. */
function coilWith(tuned: CoilCircuit, hertz: number, openPeak: number, input: Complex): CoilOnLoad {
  const reactance = 2 * Math.PI * hertz * tuned.coilHenries;
  const loss = 1 / (tuned.unloadedQ * reactance);
  const t2 = tuned.tap * tuned.tap;
  const conductance = loss + t2 * input.re;
  if (!(conductance > 0)) {
    throw new InputError({
      code: 'oscillates',
      where: 'plate',
      got: 'feedback through the grid-plate capacitance that outweighs the losses of the coil: the stage would oscillate',
      expected: 'a coil with lower unloaded Q, a lower tap, or a more capacitive plate',
      hint: 'add plate bypass, or a lower plate load',
    });
  }
  const pullHertz = tuned.retuned ? 0 : 0.5 * hertz * reactance * t2 * input.im;
  const detuneHertz = tuned.detuneHertz + pullHertz;
  const susceptance = (2 * detuneHertz) / (hertz * reactance);
  const ratio = magnitude(over(complex(loss), complex(conductance, susceptance)));
  return { peak: openPeak * ratio, loadedQ: 1 / (reactance * conductance), detuneHertz };
}

/**
 * Level and loaded Q with the detector connected.
 *
 * A stiff source gives both as stated. A coil as built is loaded by the detector's admittance at the rest point,
 * which itself moves with the carrier it leaves: the level where both agree is found by bisection and secant.
 * The dial is taken at resonance of the coil alone plus `detuneHertz`; `retuned` cancels the detector's susceptance.
 *
 * @param inputAt  the detector's admittance for a carrier of the given peak, S
 */
export function loadTunedCircuit(circuit: DetectorCircuit, inputAt: (peak: number) => Complex): TunedState {
  const openPeak = Math.SQRT2 * circuit.station.levelVoltsRms;
  const tuned = circuit.tunedCircuit;
  if (tuned.kind === 'stiff') {
    const input = inputAt(openPeak);
    return { carrierPeakVolts: openPeak, loadedQ: tuned.loadedQ, detuneHertz: tuned.detuneHertz, input, tank: null };
  }
  const hertz = circuit.station.carrierHertz;
  const excess = (peak: number): number => peak - coilWith(tuned, hertz, openPeak, inputAt(peak)).peak;
  let low = 0;
  let high = Math.max(openPeak, 1e-9);
  for (let k = 0; k < 12 && excess(high) < 0; k++) high *= 2;
  let fLow = excess(low);
  let fHigh = excess(high);
  let peak = high;
  for (let pass = 0; pass < 100 && high - low > 1e-14 * high; pass++) {
    const secant = (low * fHigh - high * fLow) / (fHigh - fLow);
    // every third pass halves, so that a bent curve cannot stall the secant
    peak = pass % 3 === 2 || !(secant > low && secant < high) ? 0.5 * (low + high) : secant;
    const f = excess(peak);
    if (f === 0) break;
    if (Math.abs(f) < 1e-13 * peak) break;
    if (f < 0) {
      low = peak;
      fLow = f;
    } else {
      high = peak;
      fHigh = f;
    }
  }
  const input = inputAt(peak);
  const loaded = coilWith(tuned, hertz, openPeak, input);
  return {
    carrierPeakVolts: peak,
    loadedQ: loaded.loadedQ,
    detuneHertz: loaded.detuneHertz,
    input,
    tank: tankOf(tuned, hertz, loaded.loadedQ, loaded.detuneHertz),
  };
}
