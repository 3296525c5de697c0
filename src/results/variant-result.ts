import type { Analysis } from '../engine/circuits/analysis.ts';
import type { DetectorCircuit } from '../engine/circuits/circuit.ts';
import type { RestPoint } from '../engine/circuits/rest-point.ts';
import { curveDecibels, type HearingCurve } from '../engine/hearing/hearing-curves.ts';
import type { OnTheAirRecord } from './air-record.ts';
import { cautionText } from './caution-text.ts';
import { type MeasuredCurve, rmsDifference } from './measured-curve.ts';
import type { CircuitRecord, SoundRecord, VariantResult } from './result.ts';

/** The circuit as the equations used it: loaded Q and detuning are those with the detector connected. */
export function circuitRecord(rest: RestPoint): CircuitRecord {
  const { circuit, tuned } = rest;
  const { station, tunedCircuit, tube, plate, output } = circuit;
  const coil = tunedCircuit.kind === 'coil' ? tunedCircuit : null;
  return {
    station,
    tunedCircuit: {
      loadedQ: tuned.loadedQ,
      detuneHertz: tuned.detuneHertz,
      unloadedQ: coil ? coil.unloadedQ : null,
      coilHenries: coil ? coil.coilHenries : null,
      tap: coil ? coil.tap : 1,
      retuned: coil ? coil.retuned : null,
    },
    detector: detectorRecord(circuit),
    tube,
    plate,
    output,
  };
}

/** The detector's own values: of a grid leak, of what stands in a cathode lead, or of a diode with what follows it. */
function detectorRecord({ detector, output }: DetectorCircuit): CircuitRecord['detector'] {
  const { kind, law, cathode, diode } = detector;
  if (kind === 'grid leak') return detector;
  const record = diode
    ? {
        kind,
        law: diode.law,
        loadOhms: diode.loadOhms,
        bypassFarads: diode.bypassFarads,
        filterOhms: diode.filterOhms,
        filterFarads: diode.filterFarads,
        capacitanceFarads: diode.capacitanceFarads,
        volume: diode.volume,
        couplingFarads: output.couplingFarads,
        followingOhms: output.loadOhms,
      }
    : {
        kind,
        law,
        cathodeOhms: cathode?.ohms ?? null,
        cathodeFarads: cathode?.farads ?? 0,
        biasVolts: cathode?.biasVolts ?? 0,
      };
  // readers of a grid leak's values look at the kind first
  return record as unknown as CircuitRecord['detector'];
}

/** One variant of a result from its analysis; `sound` only where a clip was rendered. */
export function variantResult(
  name: string,
  changes: Readonly<Record<string, string>>,
  analysis: Analysis,
  more: {
    readonly sound?: SoundRecord;
    readonly heard?: HearingCurve;
    readonly measured?: MeasuredCurve | null;
    readonly onTheAir?: OnTheAirRecord | null;
  } = {},
): VariantResult {
  const { sound, heard, measured, onTheAir } = more;
  const curve = heard && heard.name !== 'flat' ? heard : null;
  const level = curve ? curveDecibels(curve, 400) : 0;
  return {
    name,
    changes,
    circuit: circuitRecord(analysis.rest),
    rest: analysis.figures,
    socket: analysis.socket,
    response: curve
      ? analysis.response.map((row) => ({ ...row, heardThroughDecibels: curveDecibels(curve, row.hertz) - level }))
      : analysis.response,
    lowCornerHertz: analysis.lowCornerHertz,
    highCornerHertz: analysis.highCornerHertz,
    distortion: analysis.distortion,
    sensitivity: analysis.sensitivity,
    ...(sound ? { sound } : {}),
    ...(onTheAir ? { onTheAir } : {}),
    ...(curve ? { heardThrough: { name: curve.name, source: curve.source } } : {}),
    ...(measured ? { measured: { rmsDifferenceDecibels: rmsDifference(analysis.rest, measured) } } : {}),
    cautions: analysis.cautions.map(cautionText),
  };
}
