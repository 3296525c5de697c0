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
  const { plate } = rest.circuit;
  const found: Caution[] = [];
  const { supplyAmps, loadAmps, loadWatts, droppingWatts, coupledVolts } = directCurrents(rest);
  const supply = plate.supplyVolts;
  if (supply >= SHOCK_VOLTS) found.push({ code: 'shock', figure: supply, limit: SHOCK_VOLTS });
  if (plate.load.kind === 'phones' && supply > 0) found.push({ code: 'phones-in-plate', figure: supply, limit: 0 });
  found.push(...tubeCautions(rest, ratings));
  if (plate.load.kind === 'resistor') found.push(...resistorCaution('plate load', loadWatts));
  if (plate.dropping) found.push(...resistorCaution('dropping resistor', droppingWatts));
  const { windingAmps, windingSource, batteryAmpHours, feedsGrid } = ratings ?? {};
  if (windingAmps && loadAmps > windingAmps) {
    const source = windingSource === undefined ? {} : { source: windingSource };
    found.push({ code: 'winding-amps', name: plate.load.kind, figure: loadAmps, limit: windingAmps, ...source });
  }
  if (batteryAmpHours && supplyAmps > 0) {
    const further = batteryAmpHours / supplyAmps;
    found.push({ code: 'battery-life', figure: supplyAmps, limit: batteryAmpHours, further });
  }
  // volts are counted from the cathode, which is the chassis of a grid leak alone
  if (feedsGrid && rest.circuit.detector.kind === 'grid leak' && Math.abs(coupledVolts) > STRAY_GRID_VOLTS) {
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
