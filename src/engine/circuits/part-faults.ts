import { InputError } from '../errors.ts';
import { formatQuantity } from '../parts/format-quantity.ts';
import type { Detector, DetectorCircuit } from './circuit.ts';

/** A part that has failed, as found on the bench. */
export type PartFault =
  | { readonly kind: 'leaky coupling' | 'leaky bypass'; readonly ohms: number }
  /** What is left of the emission, above 0. */
  | { readonly kind: 'weak tube'; readonly share: number }
  /** Change of the leak re its value: 0.8 is 1.8 times. */
  | { readonly kind: 'leak drifted'; readonly by: number }
  | { readonly kind: 'open bypass' | 'open leak' | 'shorted bypass' };

const OF_PLATE = ['leaky coupling', 'leaky bypass', 'weak tube', 'open bypass', 'shorted bypass'] as const;
/** Faults of the parts that each detector has and the equations know. */
const PARTS_OF: Readonly<Record<Detector['kind'], readonly PartFault['kind'][]>> = {
  'grid leak': [...OF_PLATE, 'leak drifted', 'open leak'],
  'plate bend': OF_PLATE,
  'infinite impedance': ['leaky coupling', 'weak tube'],
  diode: ['leaky coupling'],
  crystal: ['leaky coupling'],
};

/**
 * The circuit with its parts failed. Raises InputError `no-such-part` for a fault of a part that the circuit does not
 * have, `no-leak` for an open leak with nothing in its place, `nothing-heard` for a shorted bypass; all at `fault`.
 */
export function withFaults(circuit: DetectorCircuit, faults: readonly PartFault[]): DetectorCircuit {
  return faults.reduce(withFault, circuit);
}

function withFault(circuit: DetectorCircuit, fault: PartFault): DetectorCircuit {
  const { plate, output, tube, detector } = circuit;
  if (!PARTS_OF[detector.kind].includes(fault.kind)) {
    throw refused('no-such-part', fault.kind, `a fault of a part that is in a ${detector.kind} detector`);
  }
  if (/bypass/.test(fault.kind) && plate.bypassFarads === 0) {
    throw refused('no-such-part', fault.kind, 'a plate bypass that could fail: this circuit has none');
  }
  switch (fault.kind) {
    case 'leaky coupling':
      if (output.couplingFarads === null) {
        throw refused(
          'no-such-part',
          fault.kind,
          'a coupling capacitor: a transformer or phones as the load need none',
        );
      }
      return { ...circuit, output: { ...output, couplingLeakOhms: fault.ohms } };
    case 'leaky bypass':
      return { ...circuit, plate: { ...plate, bypassLeakOhms: fault.ohms } };
    case 'open bypass':
      return { ...circuit, plate: { ...plate, bypassFarads: 0, bypassLeakOhms: null } };
    case 'shorted bypass':
      throw refused(
        'nothing-heard',
        fault.kind,
        'a fault that leaves something to hear',
        `the plate would stand at 0 V against ${formatQuantity(plate.supplyVolts, 'voltage')} of supply, with the load ` +
          'between them: look for a hot load and a dead plate, or write leaky bypass with a few kilohms',
      );
    case 'weak tube': {
      // a tired cathode gives less to grid and plate alike
      const { law } = tube;
      return { ...circuit, tube: { ...tube, law: { ...law, G: law.G * fault.share, Gg: law.Gg * fault.share } } };
    }
    case 'leak drifted':
      return { ...circuit, detector: { ...detector, leakOhms: detector.leakOhms * (1 + fault.by) } };
    case 'open leak': {
      const { capacitorLeakageOhms } = detector;
      if (capacitorLeakageOhms === null) {
        throw refused(
          'no-leak',
          fault.kind,
          'a grid capacitor that leaks (detector.grid capacitor leakage) to stand in for it',
          'with neither, the grid charges up and cuts the tube off: motor-boating or silence',
        );
      }
      return {
        ...circuit,
        detector: {
          ...detector,
          leakOhms: capacitorLeakageOhms,
          leakPosition: 'across capacitor',
          // the coil's foot is at the cathode unless the leak across the capacitor returned through it
          leakReturnVolts: detector.leakPosition === 'across capacitor' ? detector.leakReturnVolts : 0,
          capacitorLeakageOhms: null,
        },
      };
    }
  }
}

function refused(code: string, got: string, expected: string, hint?: string): InputError {
  return new InputError({ code, where: 'fault', got, expected, ...(hint === undefined ? {} : { hint }) });
}
