import type { DetectorCircuit } from '../circuits/circuit.ts';
import { type Fault, InputError } from '../errors.ts';
import type { StageLaws } from './instantaneous-laws.ts';
import type { ReferenceSource } from './source-drive.ts';
import { BLOCKS_PER_CYCLE } from './two-port-stepper.ts';

/** Throws InputError, with every fault found, when a request cannot be run. */
export function checkReference(
  circuit: DetectorCircuit,
  source: ReferenceSource,
  stepsPerCycle: number,
  stage: StageLaws | undefined,
  tone?: { readonly audioHertz: number; readonly modulation: number },
  times?: { readonly settleSeconds: number; readonly periods: number },
): void {
  const faults: Fault[] = [];
  const need = (ok: boolean, where: string, got: number | string, expected: string): void => {
    if (!ok) faults.push({ code: 'reference-range', where, got: String(got), expected });
  };
  need(
    Number.isInteger(stepsPerCycle) && stepsPerCycle >= 16 && stepsPerCycle % BLOCKS_PER_CYCLE === 0,
    'stepsPerCycle',
    stepsPerCycle,
    `a multiple of ${BLOCKS_PER_CYCLE}, 16 and up`,
  );
  // A textbook law is for the caller to state; running the tube's own in its place would judge the wrong thing.
  const { law } = circuit.detector;
  need(
    law === 'tube' || (stage?.grid && stage.plate) !== undefined,
    'detector.law',
    law,
    'laws of grid and plate stated',
  );
  const carrier = circuit.station.carrierHertz;
  need(carrier > 0 && Number.isFinite(carrier), 'carrierHertz', carrier, 'a frequency above 0 Hz');
  if (source.kind === 'stiff') {
    need(source.loadedQ >= 0 && Number.isFinite(source.loadedQ), 'loadedQ', source.loadedQ, '0 and up');
    need(Math.abs(source.detuneHertz) < carrier, 'detuneHertz', source.detuneHertz, 'less than the carrier');
    const level = source.levelVoltsRms;
    need(level >= 0 && level <= 1000, 'levelVoltsRms', level, '0 to 1000 V');
  } else {
    need(circuit.tunedCircuit.kind === 'coil', 'source', circuit.tunedCircuit.kind, 'a circuit with a coil');
    need(source.tankFarads > 0 && source.tankFarads < 1, 'tankFarads', source.tankFarads, 'a capacitance above 0 F');
  }
  if (tone) {
    need(
      tone.audioHertz > 0 && tone.audioHertz <= carrier / 10,
      'audioHertz',
      tone.audioHertz,
      'above 0 Hz and at most a tenth of the carrier',
    );
    need(tone.modulation >= 0 && tone.modulation <= 1, 'modulation', tone.modulation, '0 to 1');
  }
  if (times) {
    need(times.settleSeconds >= 0 && times.settleSeconds <= 10, 'settleSeconds', times.settleSeconds, '0 to 10 s');
    need(Number.isInteger(times.periods) && times.periods >= 1, 'periods', times.periods, 'a whole number from 1');
  }
  if (faults.length > 0) throw new InputError(faults);
}
