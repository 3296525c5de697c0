import type { Caution, Ratings } from '../engine/circuits/cautions.ts';
import type { DetectorCircuit, GridLeakDetector, TunedCircuit } from '../engine/circuits/circuit.ts';
import { withFaults } from '../engine/circuits/part-faults.ts';
import { type Fault, InputError } from '../engine/errors.ts';
import { singleLayerHenries } from '../engine/parts/wheeler.ts';
import type { BandLimit, PreEmphasis } from '../engine/station/pre-emphasis.ts';
import type { CathodeKind } from '../engine/tubes/fitting.ts';
import { type ListedAir, listedAir } from './list-air.ts';
import { biasedForCurrent, detectorOf, wantsRestCurrent } from './list-detector.ts';
import { outputOf, plateLoadOf, windingRating } from './list-loads.ts';
import { socketedTube } from './list-tube.ts';
import { type CircuitList, STANDARD_COIL } from './schema.ts';

/** How the station treats the clip before it is sent. */
export interface Sending {
  readonly preEmphasis: PreEmphasis;
  readonly channelLimit: BandLimit;
  readonly side: 'both' | 'left' | 'right';
}

export interface BuiltCircuit {
  readonly circuit: DetectorCircuit;
  readonly ratings: Ratings | null;
  readonly sending: Sending;
  /** What is on the air besides, and how the station is keyed; null: its programme alone. */
  readonly onTheAir: ListedAir | null;
  /** Name of a hearing curve, or of a file of the builder's own. */
  readonly heardThrough: string;
  /** What the parts themselves give cause for, before anything is computed. */
  readonly cautions: readonly Caution[];
}

/** The circuit a read list describes, its failed part in it. Throws InputError whose faults name dotted keys. */
export function buildCircuit(list: CircuitList): BuiltCircuit {
  const drawn = asDrawn(list);
  const biased = wantsRestCurrent(list) ? biasedForCurrent(drawn.circuit, list) : drawn.circuit;
  return { ...drawn, circuit: withFaults(biased, list.fault) };
}

function asDrawn(list: CircuitList): BuiltCircuit {
  const { station, plate } = list;
  const { tube, cathode, filamentVolts, ratings, cautions } = socketedTube(list);
  return {
    circuit: {
      station: {
        carrierHertz: station.carrier,
        levelVoltsRms: station.level,
        modulation: station.modulation,
      },
      tunedCircuit: tunedCircuit(list),
      detector: detectorOf(list, () => gridLeak(list, cathode, filamentVolts)),
      tube,
      plate: {
        supplyVolts: plate.supply,
        bypassFarads: plate.bypass,
        load: plateLoadOf(plate.load),
        carrierChoke:
          plate['carrier choke'] === null
            ? null
            : {
                henries: plate['carrier choke'],
                dcOhms: plate['carrier choke resistance'],
                selfFarads: plate['carrier choke capacitance'],
                bypassFarads: plate['second bypass'],
              },
        dropping:
          plate['dropping resistor'] === null
            ? null
            : { ohms: plate['dropping resistor'], farads: plate['dropping capacitor'] },
      },
      output: outputOf(list),
    },
    ratings: { ...(ratings ?? { plateVolts: null, plateWatts: null }), ...partRatings(list) },
    sending: {
      preEmphasis: station['pre-emphasis'],
      channelLimit: station['channel limit'] === '9 kHz' ? 'channel 9 kHz' : 'none',
      side: station.side,
    },
    onTheAir: listedAir(list),
    heardThrough: list.output['heard through'],
    cautions,
  };
}

/** What the list says of its parts that no equation uses. */
function partRatings(list: CircuitList): Omit<Ratings, 'plateVolts' | 'plateWatts'> {
  const { plate, output } = list;
  const winding = windingRating(plate.load);
  return {
    ...(winding === null ? {} : { windingAmps: winding.amps, windingSource: winding.source }),
    batteryAmpHours: plate['battery capacity'],
    // phones in the plate lead are all that follows
    feedsGrid: output.into === 'next grid' && plate.load.kind !== 'phones',
  };
}

function tunedCircuit(list: CircuitList): TunedCircuit {
  const written = list['tuned circuit'];
  const { detune: detuneHertz } = written;
  if (Math.abs(detuneHertz) >= list.station.carrier / 2) {
    throw fault('off-tune', 'tuned circuit.detune', `${detuneHertz} Hz`, 'less than half the carrier');
  }
  const loadedQ = written['loaded Q'];
  if (loadedQ !== undefined) {
    for (const key of ['coil', 'capacitor', 'unloaded Q', 'tap'] as const) {
      if (written[key] !== undefined) {
        throw fault(
          'two-tuned-circuits',
          `tuned circuit.${key}`,
          `${key} beside a loaded Q`,
          'either a loaded Q alone (a stiff source), or the coil with its unloaded Q',
        );
      }
    }
    return { kind: 'stiff', loadedQ, detuneHertz };
  }
  const { capacitor } = written;
  const coil = written.coil ?? woundCoil(list);
  if (coil !== undefined && capacitor !== undefined) {
    throw fault(
      'coil-and-capacitor',
      'tuned circuit.capacitor',
      'both coil and capacitor',
      'one of them: the carrier gives the other',
    );
  }
  const omega = 2 * Math.PI * list.station.carrier;
  const coilHenries = coil ?? (capacitor === undefined ? STANDARD_COIL.coilHenries : 1 / (omega * omega * capacitor));
  const antenna = written['antenna resistance'];
  const ownQ = written['unloaded Q'] ?? STANDARD_COIL.unloadedQ;
  return {
    kind: 'coil',
    coilHenries,
    // what the antenna puts across the coil damps it as its own losses do
    unloadedQ: antenna === null ? ownQ : 1 / (1 / ownQ + (omega * coilHenries) / antenna),
    tap: written.tap ?? 1,
    retuned: written.retune === 'yes',
    detuneHertz,
  };
}

/** Inductance of a coil described by its winding; undefined where the list has none. */
function woundCoil(list: CircuitList): number | undefined {
  const { turns, diameter, length, coil } = list['tuned circuit'];
  if (turns === undefined && diameter === undefined && length === undefined) return undefined;
  if (turns === undefined || diameter === undefined || length === undefined) {
    const missing = ['turns', 'diameter', 'length'].filter(
      (key) => list['tuned circuit'][key as 'turns' | 'diameter' | 'length'] === undefined,
    );
    throw fault(
      'half-a-winding',
      'tuned circuit',
      `no ${missing.join(', no ')}`,
      'turns, diameter and length together',
    );
  }
  if (coil !== undefined) throw fault('two-coils', 'tuned circuit.turns', 'a winding beside a coil', 'one of them');
  return singleLayerHenries(turns, diameter, length);
}

/**
 * Grid bias of tubes with a filament is counted from its negative end, so that end is the cathode here: a leak to
 * filament + returns to the whole filament voltage.
 */
function gridLeak(list: CircuitList, cathode: CathodeKind, filamentVolts: number): GridLeakDetector {
  const { detector } = list;
  const leakage = detector['grid capacitor leakage'];
  const returns = detector['leak returns to'];
  if (returns !== 'cathode' && cathode === 'heater oxide') {
    throw fault(
      'no-filament',
      'detector.leak returns to',
      returns,
      'cathode: this tube has a heater apart from its cathode',
    );
  }
  if (detector.leak === null && leakage === null) {
    throw fault(
      'no-leak',
      'detector.leak',
      'none, with a grid capacitor that does not leak',
      'a leak such as 2M2, or a grid capacitor leakage: else the grid charges up and stays there',
    );
  }
  const leakOhms = detector.leak ?? (leakage as number);
  return {
    kind: 'grid leak',
    law: detector.law,
    gridCapacitorFarads: detector['grid capacitor'],
    leakOhms,
    leakPosition: detector.leak === null ? 'across capacitor' : detector['leak position'],
    leakReturnVolts: returns === 'filament +' ? filamentVolts : 0,
    capacitorLeakageOhms: detector.leak === null ? null : leakage,
    chargeOhms: detector['charge resistance'],
  };
}

function fault(code: string, where: string, got: string, expected: string): InputError {
  const made: Fault = { code, where, got, expected };
  return new InputError(made);
}
