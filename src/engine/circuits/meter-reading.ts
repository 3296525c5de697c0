import type { DetectorCircuit } from './circuit.ts';
import { restPoint } from './rest-point.ts';

/**
 * What a meter reads between an electrode and the cathode, one electrode at a time: it draws its own current, and the
 * rest point moves. The carrier is on; a meter's capacitance is left out.
 *
 * @param ohms  resistance of the meter on the range in use, above 0
 * Raises InputError as `restPoint` does.
 */
export function meterReading(circuit: DetectorCircuit, ohms: number): { plateVolts: number; gridVolts: number } {
  const { plate, detector } = circuit;
  const own = plate.bypassLeakOhms ?? null;
  const across = own === null ? ohms : (own * ohms) / (own + ohms);
  const atPlate = restPoint({ ...circuit, plate: { ...plate, bypassLeakOhms: across } });
  // the leak with its return and the meter to the cathode are one resistor and one voltage (Thévenin)
  const share = ohms / (detector.leakOhms + ohms);
  const atGrid = restPoint({
    ...circuit,
    detector: {
      ...detector,
      leakOhms: detector.leakOhms * share,
      leakReturnVolts: detector.leakReturnVolts * share,
    },
  });
  return { plateVolts: atPlate.plateVolts, gridVolts: atGrid.gridVolts };
}
