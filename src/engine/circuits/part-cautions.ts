import type { Caution, Ratings } from './cautions.ts';
import { directCurrents } from './direct-currents.ts';
import type { RestPoint } from './rest-point.ts';

/** Supply from which the shock caution shows, V. Common practice, no source: B batteries of 45 V and more sting. */
const SHOCK_VOLTS = 45;
/** Ratings that resistors are sold in, W. Common practice, no source. */
const RESISTOR_WATTS = [0.25, 0.5, 1, 2, 5] as const;
/** A resistor is run at half its rating at most. Common practice, no source. */
const RATING_MARGIN = 2;
/** Direct volts on a grid that should have none, V: a tenth of a small stage's bias. Common practice, no source. */
const STRAY_GRID_VOLTS = 0.1;

/** What supply, tube, load and leaking parts give cause for at rest. */
export function partCautions(rest: RestPoint, ratings: Ratings | null): Caution[] {
  const { plate, detector } = rest.circuit;
  const found: Caution[] = [];
  const { supplyAmps, loadWatts, droppingWatts, cathodeWatts, coupledVolts } = directCurrents(rest);
  const inPlate = detector.kind === 'infinite impedance' ? null : plate.load.kind;
  const supply = plate.supplyVolts;
  if (supply >= SHOCK_VOLTS) found.push({ code: 'shock', figure: supply, limit: SHOCK_VOLTS });
  if (inPlate === 'phones' && supply > 0) found.push({ code: 'phones-in-plate', figure: supply, limit: 0 });
  found.push(...tubeCautions(rest, ratings));
  if (inPlate === 'resistor') found.push(...resistorCaution('plate load', loadWatts));
  found.push(...resistorCaution('cathode resistor', cathodeWatts));
  if (plate.dropping) found.push(...resistorCaution('dropping resistor', droppingWatts));
  const { windingAmps, windingSource, batteryAmpHours, feedsGrid } = ratings ?? {};
  if (windingAmps && inPlate !== null && supplyAmps > windingAmps) {
    const source = windingSource === undefined ? {} : { source: windingSource };
    found.push({ code: 'winding-amps', name: inPlate, figure: supplyAmps, limit: windingAmps, ...source });
  }
  if (batteryAmpHours && supplyAmps > 0) {
    const further = batteryAmpHours / supplyAmps;
    found.push({ code: 'battery-life', figure: supplyAmps, limit: batteryAmpHours, further });
  }
  if (feedsGrid && Math.abs(coupledVolts) > STRAY_GRID_VOLTS) {
    found.push({ code: 'next-grid-volts', figure: coupledVolts, limit: STRAY_GRID_VOLTS });
  }
  return found;
}

function tubeCautions(rest: RestPoint, ratings: Ratings | null): Caution[] {
  const { plateVolts: mostVolts, plateWatts: mostWatts, tubeSource } = ratings ?? {};
  const source = tubeSource === undefined ? {} : { source: tubeSource };
  const watts = rest.plateVolts * rest.currents.plateAmps;
  const found: Caution[] = [];
  if (mostVolts && rest.plateVolts > mostVolts) {
    found.push({ code: 'plate-volts', figure: rest.plateVolts, limit: mostVolts, ...source });
  }
  if (mostWatts && watts > mostWatts) found.push({ code: 'plate-watts', figure: watts, limit: mostWatts, ...source });
  return found;
}

/** Raised where the smallest rating will not do. The further figure is the rating that will; 0: none of them. */
function resistorCaution(name: string, watts: number): Caution[] {
  const [smallest] = RESISTOR_WATTS;
  if (RATING_MARGIN * watts <= smallest) return [];
  const further = RESISTOR_WATTS.find((rating) => rating >= RATING_MARGIN * watts) ?? 0;
  return [{ code: 'resistor-watts', name, figure: watts, limit: smallest / RATING_MARGIN, further }];
}
