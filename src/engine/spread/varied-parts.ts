import type { DetectorKind } from '../circuits/circuit.ts';
import type { QuantityKind } from '../parts/format-quantity.ts';

/** How a part is made, which gives it a tolerance where the list states none; null: it is then taken as it stands. */
export type PartFamily = 'capacitor' | 'resistor' | 'tube' | 'grid current' | null;

/** A part that may lie off its nominal value. */
export interface VariedPart {
  /** Its dotted key on the parts list. */
  readonly key: string;
  readonly name: string;
  readonly family: PartFamily;
  readonly kind: QuantityKind;
  /** Where its value stands in a circuit, and what goes along with it. */
  readonly paths: readonly [string, ...string[]];
  /** −1: the circuit holds its reciprocal. */
  readonly power: 1 | -1;
  /** Detectors that use it: a circuit holds values of others, which do nothing there. */
  readonly kinds: readonly DetectorKind[];
}

const GRID_LEAK: readonly DetectorKind[] = ['grid leak'];
const WITH_CATHODE_LEAD: readonly DetectorKind[] = ['plate bend', 'infinite impedance'];
/** A follower's plate has no load, only its bypass. */
const WITH_LOAD: readonly DetectorKind[] = ['grid leak', 'plate bend'];
const WITH_TUBE: readonly DetectorKind[] = [...GRID_LEAK, ...WITH_CATHODE_LEAD];
const WITH_DIODE: readonly DetectorKind[] = ['diode', 'crystal'];
const ALL: readonly DetectorKind[] = [...WITH_TUBE, ...WITH_DIODE];

function part(
  key: string,
  name: string,
  family: PartFamily,
  kind: QuantityKind,
  path: string,
  kinds: readonly DetectorKind[],
  ...along: readonly string[]
): VariedPart {
  return { key, name, family, kind, paths: [path, ...along], power: 1, kinds };
}

/** A value of the plate load. */
function ofLoad(name: string, kind: QuantityKind, field: string, ...along: readonly string[]): VariedPart {
  const family = field === 'ohms' ? 'resistor' : null;
  const inLoad = (one: string): string => `plate.load.${one}`;
  return part(inLoad(name), `load, ${name}`, family, kind, inLoad(field), WITH_LOAD, ...along.map(inLoad));
}

/**
 * Every part that can vary, in the order in which random numbers are drawn for them: a part's draws do not depend on
 * which of the others vary. New ones go to the end, so that a seed keeps its meaning.
 */
export const VARIED_PARTS: readonly VariedPart[] = [
  part(
    'detector.grid capacitor',
    'grid capacitor',
    'capacitor',
    'capacitance',
    'detector.gridCapacitorFarads',
    GRID_LEAK,
  ),
  part('detector.leak', 'leak', 'resistor', 'resistance', 'detector.leakOhms', GRID_LEAK),
  part('plate.bypass', 'bypass', 'capacitor', 'capacitance', 'plate.bypassFarads', WITH_TUBE),
  ofLoad('resistance', 'resistance', 'ohms'),
  part('output.coupling', 'coupling', 'capacitor', 'capacitance', 'output.couplingFarads', ALL),
  part('output.load resistance', 'resistance it feeds', 'resistor', 'resistance', 'output.loadOhms', ALL),
  part('detector.tube', 'tube, current and slope', 'tube', 'number', 'tube.law.G', WITH_TUBE),
  part('tube.grid current.at zero volts', 'grid current at 0 V', 'grid current', 'current', 'tube.law.Gg', WITH_TUBE),
  part('plate.dropping resistor', 'dropping resistor', 'resistor', 'resistance', 'plate.dropping.ohms', WITH_TUBE),
  part(
    'plate.dropping capacitor',
    'dropping capacitor',
    'capacitor',
    'capacitance',
    'plate.dropping.farads',
    WITH_TUBE,
  ),
  part(
    'plate.second bypass',
    'second bypass',
    'capacitor',
    'capacitance',
    'plate.carrierChoke.bypassFarads',
    WITH_LOAD,
  ),
  part('plate.carrier choke', 'carrier choke', null, 'inductance', 'plate.carrierChoke.henries', WITH_LOAD),
  part('plate.supply', 'supply', null, 'voltage', 'plate.supplyVolts', WITH_TUBE),
  part('output.load capacitance', 'capacitance it feeds', null, 'capacitance', 'output.loadFarads', ALL),
  part('tuned circuit.coil', 'coil', null, 'inductance', 'tunedCircuit.coilHenries', ALL),
  // a tuning capacitance stands for the coil that it tunes to the carrier
  {
    ...part('tuned circuit.capacitor', 'tuning capacitor', null, 'capacitance', 'tunedCircuit.coilHenries', ALL),
    power: -1,
  },
  part('tuned circuit.unloaded Q', 'unloaded Q', null, 'number', 'tunedCircuit.unloadedQ', ALL),
  part('tuned circuit.loaded Q', 'loaded Q', null, 'number', 'tunedCircuit.loadedQ', ALL),
  ofLoad('inductance', 'inductance', 'henries'),
  ofLoad('dc resistance', 'resistance', 'dcOhms'),
  ofLoad('core loss', 'resistance', 'coreLossOhms'),
  ofLoad('eddy loss', 'resistance', 'eddyLossOhms'),
  ofLoad('self capacitance', 'capacitance', 'selfFarads'),
  ofLoad(
    'primary inductance',
    'inductance',
    'primaryHenries',
    'falling.henriesWithoutCurrent',
    'falling.henriesAtAmps',
  ),
  ofLoad('primary dc resistance', 'resistance', 'primaryDcOhms'),
  ofLoad('leakage', 'inductance', 'leakageHenries'),
  ofLoad('primary capacitance', 'capacitance', 'primaryFarads'),
  ofLoad('secondary dc resistance', 'resistance', 'secondaryDcOhms'),
  ofLoad('secondary capacitance', 'capacitance', 'secondaryFarads'),
  part(
    'detector.grid capacitor leakage',
    "grid capacitor's leakage",
    null,
    'resistance',
    'detector.capacitorLeakageOhms',
    GRID_LEAK,
  ),
  part(
    'detector.cathode resistor',
    'cathode resistor',
    'resistor',
    'resistance',
    'detector.cathode.ohms',
    WITH_CATHODE_LEAD,
  ),
  part(
    'detector.cathode capacitor',
    'cathode capacitor',
    'capacitor',
    'capacitance',
    'detector.cathode.farads',
    WITH_CATHODE_LEAD,
  ),
  part('detector.perveance', 'diode, perveance', 'tube', 'number', 'detector.diode.law.perveance', WITH_DIODE),
  part(
    'detector.saturation current',
    'crystal, saturation current',
    null,
    'current',
    'detector.diode.law.saturationAmps',
    WITH_DIODE,
  ),
  part(
    'detector.series resistance',
    'crystal, series resistance',
    null,
    'resistance',
    'detector.diode.law.seriesOhms',
    WITH_DIODE,
  ),
  part(
    'detector.diode capacitance',
    'diode, capacitance',
    null,
    'capacitance',
    'detector.diode.capacitanceFarads',
    WITH_DIODE,
  ),
  part('detector.diode load', 'diode load', 'resistor', 'resistance', 'detector.diode.loadOhms', WITH_DIODE),
  part('detector.diode bypass', 'diode bypass', 'capacitor', 'capacitance', 'detector.diode.bypassFarads', WITH_DIODE),
  part(
    'detector.filter resistor',
    'filter resistor',
    'resistor',
    'resistance',
    'detector.diode.filterOhms',
    WITH_DIODE,
  ),
  part(
    'detector.filter capacitor',
    'filter capacitor',
    'capacitor',
    'capacitance',
    'detector.diode.filterFarads',
    WITH_DIODE,
  ),
];
