import type { RestPoint } from '../engine/circuits/rest-point.ts';
import { formatQuantity } from '../engine/parts/format-quantity.ts';
import { loadText } from './load-text.ts';

/** The settings that a WAV file carries in its comment, on one line. */
export function soundComment(name: string, rest: RestPoint, fullScaleVolts: number, gainDecibels: number): string {
  const { station, detector, tube, plate, output } = rest.circuit;
  return [
    name,
    `${tube.type} ${detector.kind}, ${detector.law} law`,
    `carrier ${formatQuantity(station.carrierHertz, 'frequency')} ${formatQuantity(station.levelVoltsRms, 'voltage')} rms, ${Math.round(100 * station.modulation)} %`,
    `grid capacitor ${formatQuantity(detector.gridCapacitorFarads, 'capacitance')}, leak ${formatQuantity(detector.leakOhms, 'resistance')} ${detector.leakPosition}`,
    `supply ${formatQuantity(plate.supplyVolts, 'voltage')}, bypass ${formatQuantity(plate.bypassFarads, 'capacitance')}`,
    `load ${loadText(plate.load)}${output.couplingFarads === null ? '' : `, coupling ${formatQuantity(output.couplingFarads, 'capacitance')}`}`,
    `full scale ${formatQuantity(fullScaleVolts, 'voltage')}, gain ${gainDecibels.toFixed(2)} dB`,
  ].join('; ');
}
