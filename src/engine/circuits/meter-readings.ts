import { formatQuantity } from '../parts/format-quantity.ts';
import { type RestPoint, restWith } from './rest-point.ts';

/** A voltmeter as a resistance: one for all ranges, or so much for each volt of full scale. */
export type Meter =
  | { readonly kind: 'fixed'; readonly ohms: number }
  /** V of full scale; null: the smallest common range that holds what is there before the meter is connected. */
  | { readonly kind: 'per volt'; readonly ohmsPerVolt: number; readonly rangeVolts: number | null };

/** Full-scale volts of common analogue meters. Common practice, no source. */
export const METER_RANGES: readonly number[] = [1, 2.5, 5, 10, 25, 50, 100, 250, 500, 1000];

/**
 * The meters a bench has: a digital one of 10 MΩ, an analogue one of 20 kΩ per volt, and one of 1 kΩ per volt as service
 * sheets of the thirties were written with. Common practice, no source.
 */
export const COMMON_METERS: readonly Meter[] = [
  { kind: 'fixed', ohms: 10e6 },
  { kind: 'per volt', ohmsPerVolt: 20e3, rangeVolts: null },
  { kind: 'per volt', ohmsPerVolt: 1e3, rangeVolts: null },
];

export type Electrode = 'plate' | 'grid' | 'cathode' | 'supply' | 'diode load' | 'behind coupling';

export interface MeterReading {
  /** What the meter is called: `10 MΩ`, `20 kΩ/V`. */
  readonly meter: string;
  readonly meterOhms: number;
  /** V of full scale; null for a meter of one resistance. */
  readonly rangeVolts: number | null;
  /** What stands there with the meter on it; beyond a stated range the needle is at its stop. */
  readonly volts: number;
}

/** One electrode of the socket, or point of its wiring, against the chassis. */
export interface SocketRow {
  readonly electrode: Electrode;
  /** With no meter connected. */
  readonly volts: number;
  readonly readings: readonly MeterReading[];
}

export function meterName(meter: Meter): string {
  if (meter.kind === 'fixed') return formatQuantity(meter.ohms, 'resistance');
  const name = `${formatQuantity(meter.ohmsPerVolt, 'resistance')}/V`;
  return meter.rangeVolts === null ? name : `${name}, ${formatQuantity(meter.rangeVolts, 'voltage')}`;
}

/**
 * The voltages of the socket at rest, and what each meter makes of them: its resistance is put from the electrode to the
 * chassis and the rest point solved again, the carrier held. A point of no resistance (a cathode at chassis level, a
 * supply without a dropping resistor) reads true. Of a diode the points are the live end of its load and what follows.
 */
export function socketRows(rest: RestPoint, meters: readonly Meter[] = COMMON_METERS): SocketRow[] {
  const { gridNode, plateNode, points } = rest.audio;
  const { chassisNode, feedNode, coupledNode } = points;
  const between = (volts: Float64Array, node: number | null): number =>
    (node === null ? 0 : (volts[node] as number)) - (chassisNode === null ? 0 : (volts[chassisNode] as number));
  const at = (electrode: Electrode, node: number | null): SocketRow => {
    const volts = between(rest.unknowns, node);
    const loaded = (ohms: number): number => between(restWith(rest, node, chassisNode, 1 / ohms), node);
    const isChassis = node === chassisNode;
    return { electrode, volts, readings: meters.map((meter) => reading(meter, volts, isChassis ? () => 0 : loaded)) };
  };
  const { supplyVolts } = rest.circuit.plate;
  const supply: SocketRow =
    feedNode === null
      ? {
          electrode: 'supply',
          volts: supplyVolts,
          readings: meters.map((meter) => reading(meter, supplyVolts, () => supplyVolts)),
        }
      : at('supply', feedNode);
  return [
    ...(rest.circuit.detector.diode
      ? [at('diode load', null)]
      : [at('plate', plateNode), at('grid', gridNode), at('cathode', null), supply]),
    ...(coupledNode === null ? [] : [at('behind coupling', coupledNode)]),
  ];
}

function reading(meter: Meter, trueVolts: number, loaded: (ohms: number) => number): MeterReading {
  const rangeVolts = meter.kind === 'fixed' ? null : (meter.rangeVolts ?? rangeFor(trueVolts));
  const meterOhms = meter.kind === 'fixed' ? meter.ohms : meter.ohmsPerVolt * (rangeVolts as number);
  return { meter: meterName(meter), meterOhms, rangeVolts, volts: loaded(meterOhms) };
}

/** The range a builder takes who expects the true voltage: from a larger one the needle hardly leaves its stop. */
function rangeFor(volts: number): number {
  return METER_RANGES.find((range) => range >= Math.abs(volts)) ?? (METER_RANGES.at(-1) as number);
}
