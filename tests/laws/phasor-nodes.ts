import type { DetectorCircuit, ResistorLoad } from '../../src/engine/circuits/circuit.ts';

export type Phasor = readonly [re: number, im: number];

const plus = (a: Phasor, b: Phasor): Phasor => [a[0] + b[0], a[1] + b[1]];
const minus = (a: Phasor, b: Phasor): Phasor => [a[0] - b[0], a[1] - b[1]];
export const times = (a: Phasor, b: Phasor): Phasor => [a[0] * b[0] - a[1] * b[1], a[0] * b[1] + a[1] * b[0]];
export const over = (a: Phasor, b: Phasor): Phasor => {
  const size = b[0] * b[0] + b[1] * b[1];
  return [(a[0] * b[0] + a[1] * b[1]) / size, (a[1] * b[0] - a[0] * b[1]) / size];
};
export const size = (a: Phasor): number => Math.hypot(a[0], a[1]);

/** Solves Y·V = I for a few nodes by elimination with pivoting; both arrays are used up. */
function solvePhasors(y: Phasor[][], i: Phasor[]): Phasor[] {
  const n = i.length;
  for (let c = 0; c < n; c++) {
    let best = c;
    for (let r = c + 1; r < n; r++) if (size(y[r]![c]!) > size(y[best]![c]!)) best = r;
    [y[c], y[best]] = [y[best]!, y[c]!];
    [i[c], i[best]] = [i[best]!, i[c]!];
    for (let r = 0; r < n; r++) {
      if (r === c) continue;
      const f = over(y[r]![c]!, y[c]![c]!);
      y[r] = y[r]!.map((v, k) => minus(v, times(f, y[c]![k]!)));
      i[r] = minus(i[r]!, times(f, i[c]!));
    }
  }
  return i.map((v, k) => over(v, y[k]![k]!));
}

/** A tube made straight: what it adds at one frequency, S. */
export interface StraightTube {
  readonly gridSiemens: number;
  /** Of the cathode current, of which the grid takes its share from the plate. */
  readonly gmSiemens: number;
  readonly gpSiemens: number;
}

/** What drives the stage at one frequency. */
export type Drive =
  | { readonly kind: 'tap volts'; readonly volts: Phasor }
  /** Into the top of the tank, whose capacitance is `tankFarads`. */
  | { readonly kind: 'tank amps'; readonly amps: Phasor; readonly tankFarads: number }
  /** Drawn from the grid node and given back at the plate, as a grid does; the source being dead. */
  | { readonly kind: 'grid amps'; readonly amps: Phasor };

export interface NodeVolts {
  readonly tap: Phasor;
  readonly grid: Phasor;
  readonly plate: Phasor;
  readonly output: Phasor;
  /** Into the detector from the tap, over the tap's volts. */
  readonly input: Phasor;
}

/**
 * Node voltages of a straight grid-leak stage at one frequency, written out by hand as an independent answer.
 *
 * @param omega        rad/s of the stage's capacitors (a stepping rule's own, where its rule is to be met exactly)
 * @param tankOmega    rad/s of the tank's coil and capacitor, whose losses are stated at `lossOmega`
 */
export function straightStage(
  circuit: DetectorCircuit,
  tube: StraightTube,
  drive: Drive,
  omega: number,
  tankOmega = omega,
  lossOmega = tankOmega,
): NodeVolts {
  const { detector, plate, output, tunedCircuit } = circuit;
  const across = detector.leakPosition === 'across capacitor';
  const leak = 1 / detector.leakOhms;
  const leakage = detector.capacitorLeakageOhms === null ? 0 : 1 / detector.capacitorLeakageOhms;
  const series: Phasor = [(across ? leak : 0) + leakage, omega * detector.gridCapacitorFarads];
  const gridFoot: Phasor = [(across ? 0 : leak) + tube.gridSiemens, omega * circuit.tube.gridCathodeFarads];
  const gridPlate: Phasor = [0, omega * circuit.tube.gridPlateFarads];
  const plateFoot: Phasor = [
    1 / (plate.load as ResistorLoad).ohms + tube.gpSiemens,
    omega * (plate.bypassFarads + circuit.tube.plateCathodeFarads),
  ];
  const coupling: Phasor = [0, omega * (output.couplingFarads ?? 0)];
  const outFoot: Phasor = [1 / (output.loadOhms ?? Number.POSITIVE_INFINITY), omega * output.loadFarads];
  const zero: Phasor = [0, 0];
  const less = (y: Phasor): Phasor => [-y[0], -y[1]];
  // Rows: tap, grid, plate, output. The tap's own row is the source.
  let tapRow: Phasor[] = [[1, 0], zero, zero, zero];
  const amps: Phasor[] = [zero, zero, zero, zero];
  if (drive.kind === 'tap volts') amps[0] = drive.volts;
  else if (drive.kind === 'grid amps') {
    amps[1] = less(drive.amps);
    amps[2] = drive.amps;
  } else {
    if (tunedCircuit.kind !== 'coil') throw new RangeError('a tank needs a coil');
    const { coilHenries, unloadedQ, tap } = tunedCircuit;
    const tank: Phasor = [
      1 / (unloadedQ * lossOmega * coilHenries),
      tankOmega * drive.tankFarads - 1 / (tankOmega * coilHenries),
    ];
    // An ideal tap: admittance at the top divided by t², current by t.
    tapRow = [plus([tank[0] / tap ** 2, tank[1] / tap ** 2], series), less(series), zero, zero];
    amps[0] = [drive.amps[0] / tap, drive.amps[1] / tap];
  }
  const volts = solvePhasors(
    [
      tapRow,
      [less(series), plus(plus(series, gridFoot), gridPlate), less(gridPlate), zero],
      [
        zero,
        plus([tube.gmSiemens - tube.gridSiemens, 0], less(gridPlate)),
        plus(plus(plateFoot, gridPlate), coupling),
        less(coupling),
      ],
      [zero, zero, less(coupling), plus(coupling, outFoot)],
    ],
    amps,
  );
  const [tap, grid, plateVolts, out] = volts as [Phasor, Phasor, Phasor, Phasor];
  const input = size(tap) > 0 ? over(times(series, minus(tap, grid)), tap) : zero;
  return { tap, grid, plate: plateVolts, output: out, input };
}
