import type { DiodeLaw } from '../circuits/circuit.ts';
import type { RestPoint } from '../circuits/rest-point.ts';
import { smoothLaws } from '../circuits/stage-laws.ts';
import type { StageLaws } from '../reference/instantaneous-laws.ts';
import type { ReferenceSource } from '../reference/source-drive.ts';

/**
 * The source of a solved circuit as the carrier-cycle reference wants it stated. For a coil the dial stands where the
 * averaged rest point puts it: both are then asked the same question, and a wrong answer of either shows as detuning.
 */
export function referenceSource(rest: RestPoint): ReferenceSource {
  const { tunedCircuit, station } = rest.circuit;
  if (tunedCircuit.kind === 'stiff') {
    return {
      kind: 'stiff',
      loadedQ: tunedCircuit.loadedQ,
      detuneHertz: tunedCircuit.detuneHertz,
      levelVoltsRms: station.levelVoltsRms,
    };
  }
  const omega = 2 * Math.PI * station.carrierHertz;
  const resonance = omega - 2 * Math.PI * tunedCircuit.detuneHertz;
  const open = 1 / (resonance * resonance * tunedCircuit.coilHenries);
  const detector = (tunedCircuit.tap * tunedCircuit.tap * rest.tuned.input.im) / omega;
  return { kind: 'coil', tankFarads: tunedCircuit.retuned ? open - detector : open, openTankFarads: open };
}

/** The instantaneous laws that stand for a textbook law of a circuit; none for the tube's own. */
export function referenceLaws(rest: RestPoint): StageLaws | undefined {
  const { circuit, quiet } = rest;
  const { diode } = circuit.detector;
  if (diode) return { grid: diodeLaw(diode.law), plate: { law: 'none' } };
  if (quiet === null) return undefined;
  const { law, chargeOhms, leakOhms } = circuit.detector;
  const out = new Float64Array(4);
  smoothLaws(circuit.tube.law).grid.evaluate(quiet.gridVolts, out);
  const [restAmps, siemens, bend] = [out[0] as number, out[1] as number, out[2] as number];
  return {
    grid:
      law === 'square'
        ? { law: 'quadratic', restVolts: quiet.gridVolts, restAmps, siemens, curvature: bend / 2 }
        : { law: 'rectifier', chargeOhms: chargeOhms ?? leakOhms / 1000 },
    plate: {
      law: 'straight',
      restAmps: quiet.cathodeAmps,
      gridVolts: quiet.gridVolts,
      plateVolts: quiet.plateVolts,
      gmSiemens: quiet.cathodeSiemens,
      gpSiemens: quiet.cathodeSiemens / circuit.tube.law.mu + quiet.kneeSiemens,
    },
  };
}

/** A diode's law at its junction: the reference has the series resistance in its network. */
function diodeLaw(law: DiodeLaw): NonNullable<StageLaws['grid']> {
  if (law.kind === '3/2') return { law: '3/2', perveance: law.perveance, sharpness: law.sharpness };
  const { saturationAmps, idealityVolts } = law;
  return { law: 'exponential', currentAmps: saturationAmps, efoldVolts: idealityVolts, lessAmps: saturationAmps };
}
