import {
  CHOKES,
  LOW_IMPEDANCE_EARPIECE,
  type LoadPart,
  PHONES,
  resonanceParts,
  TRANSFORMERS,
} from '../engine/circuits/catalogue-loads.ts';
import type {
  ChokeLoad,
  Output,
  PhonesLoad,
  PlateLoad,
  Transformer,
  TransformerLoad,
} from '../engine/circuits/circuit.ts';
import { InputError } from '../engine/errors.ts';
import { nearestName } from '../engine/parts/nearest-name.ts';
import { outputPart } from './output-parts.ts';
import type { WrittenLoad } from './plate-load.ts';
import type { CircuitList } from './schema.ts';

/** The plate load of a list, with the catalogue's values where none are written. Throws InputError. */
export function plateLoadOf(load: WrittenLoad): PlateLoad {
  switch (load.kind) {
    case 'resistor':
      return { kind: 'resistor', ohms: load.resistance };
    case 'choke':
      return chokeOf(load);
    case 'transformer':
      return { kind: 'transformer', ...transformerOf(load, 'plate.load') };
    case 'phones':
      return phonesOf(load);
  }
}

/** What follows the plate. A transformer or phones as the load need no coupling capacitor. */
export function outputOf(list: CircuitList): Output {
  const { output, plate, detector } = list;
  const diode = detector.kind === 'diode' || detector.kind === 'crystal';
  if (plate.load.kind === 'phones' && !diode && detector.kind !== 'infinite impedance') {
    return { couplingFarads: null, loadOhms: null, loadFarads: 0, matching: null, phones: null };
  }
  const part = outputPart(output.into);
  const phones =
    output.into === 'phones'
      ? (PHONES[0] as LoadPart<PhonesLoad>).load
      : output.into === 'low-impedance earpiece'
        ? LOW_IMPEDANCE_EARPIECE.load
        : null;
  const { falling, ...matching } = output.matching
    ? transformerOf(output.matching, 'output.matching')
    : { falling: null };
  const loadOhms = output['load resistance'] ?? part.loadOhms;
  // behind a capacitor an open end would float: what is heard there is what stands before it
  const isOpen = loadOhms === null && phones === null && !output.matching;
  return {
    // a diode's direct current goes through phones or a transformer that it feeds
    couplingFarads:
      isOpen ||
      (diode && detector['diode load'] === undefined && (phones !== null || output.matching)) ||
      (plate.load.kind === 'transformer' && !diode && detector.kind !== 'infinite impedance')
        ? null
        : output.coupling,
    loadOhms,
    loadFarads: output['load capacitance'] ?? part.loadFarads,
    matching: output.matching ? (matching as Transformer) : null,
    phones,
  };
}

function chokeOf(load: Extract<WrittenLoad, { kind: 'choke' }>): ChokeLoad {
  const known = partNamed(CHOKES, load.part, 'plate.load.part').load;
  return {
    kind: 'choke',
    henries: load.inductance ?? known.henries,
    dcOhms: load['dc resistance'] ?? known.dcOhms,
    coreLossOhms: load['core loss'] === undefined ? known.coreLossOhms : load['core loss'],
    selfFarads: load['self capacitance'] ?? known.selfFarads,
  };
}

function phonesOf(load: Extract<WrittenLoad, { kind: 'phones' }>): PhonesLoad {
  const named = partNamed(PHONES, load.part, 'plate.load.part').load;
  // windings of other resistance have turns, and so all impedances, in proportion
  const scale = load.part === undefined ? (load['dc resistance'] ?? named.dcOhms) / named.dcOhms : 1;
  const [ohms, henries, farads] = [named.resonanceOhms ?? 0, named.resonanceHenries ?? 0, named.resonanceFarads ?? 0];
  const hertz = load['resonant frequency'] ?? 1 / (2 * Math.PI * Math.sqrt(henries * farads));
  const height = load['resonance resistance'] === undefined ? scale * ohms : load['resonance resistance'];
  const q = load['resonance Q'] ?? ohms * Math.sqrt(farads / henries);
  const eddy = load['eddy loss'];
  return {
    kind: 'phones',
    dcOhms: load['dc resistance'] ?? named.dcOhms,
    henries: load.inductance ?? scale * named.henries,
    eddyLossOhms: eddy === undefined ? (named.eddyLossOhms === null ? null : scale * named.eddyLossOhms) : eddy,
    selfFarads: load['self capacitance'] ?? named.selfFarads,
    // windings without turns are no motor
    ...(height === null || height === 0
      ? { resonanceOhms: null, resonanceHenries: null, resonanceFarads: null }
      : resonanceParts(hertz, height, q)),
  };
}

type WrittenTransformer = Omit<Extract<WrittenLoad, { kind: 'transformer' }>, 'kind'>;

function transformerOf(load: WrittenTransformer, where: string): Omit<TransformerLoad, 'kind'> {
  const { kind, ...known } = partNamed(TRANSFORMERS, load.part, `${where}.part`).load;
  const amps = load['at current'];
  const henries = load['inductance at current'];
  const written = load['primary inductance'];
  if ((amps === undefined) !== (henries === undefined)) {
    const missing = amps === undefined ? 'at current' : 'inductance at current';
    throw wrong('half-a-pair', where, `no ${missing}`, 'both: a direct current, and the inductance at it');
  }
  const without = written ?? known.primaryHenries;
  if (henries !== undefined && henries > without) {
    throw wrong(
      'rising-inductance',
      `${where}.inductance at current`,
      `${henries} H`,
      `at most the ${without} H it has without current`,
    );
  }
  const pair =
    amps !== undefined && henries !== undefined
      ? { henriesWithoutCurrent: without, amps, henriesAtAmps: henries }
      : // a stated inductance without a pair is taken as it stands
        written === undefined
        ? known.falling
        : null;
  return {
    ...known,
    ratio: load.ratio ?? known.ratio,
    primaryHenries: without,
    primaryDcOhms: load['primary dc resistance'] ?? known.primaryDcOhms,
    leakageHenries: load.leakage ?? known.leakageHenries,
    coreLossOhms: load['core loss'] === undefined ? known.coreLossOhms : load['core loss'],
    primaryFarads: load['primary capacitance'] ?? known.primaryFarads,
    secondaryDcOhms: load['secondary dc resistance'] ?? known.secondaryDcOhms,
    secondaryFarads: load['secondary capacitance'] ?? known.secondaryFarads,
    falling: pair,
  };
}

function partNamed<Load>(parts: readonly LoadPart<Load>[], name: string | undefined, where: string): LoadPart<Load> {
  if (name === undefined) return parts[0] as LoadPart<Load>;
  const plain = (text: string): string => text.toLowerCase().replace(/[^a-z0-9]/g, '');
  const found = parts.find((part) => plain(part.name) === plain(name));
  if (found) return found;
  const names = parts.map((part) => part.name);
  const near = nearestName(name, names);
  throw new InputError({
    code: 'unknown-part',
    where,
    got: name,
    expected: `one of ${names.join(', ')}`,
    ...(near === null ? {} : { hint: `nearest: ${near}` }),
  });
}

function wrong(code: string, where: string, got: string, expected: string): InputError {
  return new InputError({ code, where, got, expected });
}

/**
 * Direct current above which a load's core or winding is outside its rating, A, with where that is from; null where none
 * is known, as of a winding whose inductance the list gives without a current.
 */
export function windingRating(load: WrittenLoad): { readonly amps: number; readonly source: string } | null {
  if (load.kind === 'resistor' || load.kind === 'phones') return null;
  const own = load.kind === 'choke' ? load.inductance : load['primary inductance'];
  if (load.kind === 'transformer' && load['at current'] !== undefined) {
    return { amps: load['at current'], source: "the current at which the list knows the winding's inductance" };
  }
  if (own !== undefined) return null;
  const parts: readonly LoadPart<unknown>[] = load.kind === 'choke' ? CHOKES : TRANSFORMERS;
  const { name, ratedAmps, source } = partNamed(parts, load.part, 'plate.load.part');
  return ratedAmps === null ? null : { amps: ratedAmps, source: `${load.kind} ${name}: ${source}` };
}
