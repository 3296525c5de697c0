import type { DetectorCircuit } from '../circuits/circuit.ts';
import { InputError } from '../errors.ts';

/** The source of a reference run, stated by the caller whatever the circuit's own tuned circuit says. */
export type ReferenceSource =
  | {
      /** An ideal voltage: Q, detuning (station minus resonance, Hz) and rms carrier at the detector's input. */
      readonly kind: 'stiff';
      readonly loadedQ: number;
      readonly detuneHertz: number;
      readonly levelVoltsRms: number;
    }
  | {
      /** The coil of `circuit.tunedCircuit` with the detector connected. */
      readonly kind: 'coil';
      /** Tuning capacitance as it stands with the detector connected, F. */
      readonly tankFarads: number;
      /** Tuning capacitance at which the open-circuit level is stated, F; absent: resonance at carrier − detuning. */
      readonly openTankFarads?: number;
    };

/**
 * The drive as e(t) = Re[(E0 + Eu·exp(jΩt) + El·exp(−jΩt))·exp(jωt)], in the sums and differences the loop uses:
 * sum = Eu + El, difference = Eu − El. Peak volts (stiff) or peak amperes (coil).
 */
export interface DrivePhasors {
  readonly carrierRe: number;
  readonly carrierIm: number;
  readonly sumRe: number;
  readonly sumIm: number;
  readonly differenceRe: number;
  readonly differenceIm: number;
}

/**
 * The three phasors of a carrier modulated by one tone, 1 + m·cos Ωt, behind one pole 1/(1 + j2Q(f + δ)/f0) scaled so
 * that the carrier itself is `peak` at angle 0. `loadedQ` 0 leaves the pole out.
 */
export function tonePhasors(
  peak: number,
  modulation: number,
  audioHertz: number,
  carrierHertz: number,
  loadedQ: number,
  detuneHertz: number,
): DrivePhasors {
  const perHertz = (2 * loadedQ) / (carrierHertz - detuneHertz);
  const side = (offset: number): readonly [number, number] => {
    // (1 + j·a0) / (1 + j·a1)
    const a0 = perHertz * detuneHertz;
    const a1 = perHertz * (detuneHertz + offset);
    const scale = (peak * modulation) / 2 / (1 + a1 * a1);
    return [scale * (1 + a0 * a1), scale * (a0 - a1)];
  };
  const [ur, ui] = side(audioHertz);
  const [lr, li] = side(-audioHertz);
  return {
    carrierRe: peak,
    carrierIm: 0,
    sumRe: ur + lr,
    sumIm: ui + li,
    differenceRe: ur - lr,
    differenceIm: ui - li,
  };
}

/** Peak amperes that put the circuit's open-circuit level at the tap, no detector connected. */
export function coilDriveAmps(
  circuit: DetectorCircuit,
  source: Extract<ReferenceSource, { kind: 'coil' }>,
  carrierHertz: number,
): number {
  const coil = circuit.tunedCircuit;
  if (coil.kind !== 'coil') {
    throw new InputError({ code: 'no-coil', where: 'source', got: coil.kind, expected: 'a circuit with a coil' });
  }
  const omega = 2 * Math.PI * carrierHertz;
  const resonance = 2 * Math.PI * (carrierHertz - coil.detuneHertz);
  const farads = source.openTankFarads ?? 1 / (resonance * resonance * coil.coilHenries);
  const conductance = 1 / (coil.unloadedQ * omega * coil.coilHenries);
  const susceptance = omega * farads - 1 / (omega * coil.coilHenries);
  return (circuit.station.levelVoltsRms * Math.SQRT2 * Math.hypot(conductance, susceptance)) / coil.tap;
}
