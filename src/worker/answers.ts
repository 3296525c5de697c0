import { analyse } from '../engine/circuits/analysis.ts';
import { restPoint } from '../engine/circuits/rest-point.ts';
import { InputError } from '../engine/errors.ts';
import { integratedLoudness } from '../engine/measure/loudness.ts';
import { faultText } from '../results/fault-text.ts';
import type { VariantResult } from '../results/result.ts';
import { soundComment } from '../results/sound-comment.ts';
import { variantResult } from '../results/variant-result.ts';
import { writeWav } from '../results/wav-write.ts';
import type { FromWorker, ToWorker, WantedCircuit } from './messages.ts';
import { peakOf, wholeVolts } from './sound-job.ts';
import type { Workshop } from './workshop.ts';

type Asked<Kind extends ToWorker['kind']> = Extract<ToWorker, { kind: Kind }>;

/** All figures of a circuit, as the command's result file has them. */
export function figures(workshop: Workshop, { name, circuit }: Asked<'figures'>): VariantResult {
  const { programme, heard, cautions, ...built } = workshop.prepare(circuit);
  const analysis = analyse(built.circuit, built.ratings);
  const limited = programme.limitedSamples;
  const more = limited > 0 ? [{ code: 'limited' as const, figure: limited, limit: 0 }] : [];
  const changes = Object.assign({}, ...circuit.layers) as Record<string, unknown>;
  const asText = Object.fromEntries(
    Object.entries(changes).map(([key, value]) => [
      key,
      typeof value === 'object' ? JSON.stringify(value) : `${value}`,
    ]),
  );
  return variantResult(
    name,
    asText,
    { ...analysis, cautions: [...analysis.cautions, ...cautions, ...more] },
    { heard },
  );
}

/** The programme itself, its peak at full scale. */
export function sent(workshop: Workshop, id: number, circuit: WantedCircuit): FromWorker {
  const { modulation } = workshop.prepare(circuit).programme;
  const peak = peakOf(modulation);
  const flat = peak > 0 ? modulation.map((value) => value / peak) : modulation;
  return {
    kind: 'whole',
    id,
    samples: Float32Array.from(flat),
    peak: peak > 0 ? 1 : 0,
    loudnessLufs: integratedLoudness([flat], workshop.opening.sampleRateHertz),
  };
}

/** The WAV file of a circuit, 24 bits, as the command writes it. */
export function wav(workshop: Workshop, { name, circuit, gainDecibels, seed }: Asked<'wav'>): Uint8Array<ArrayBuffer> {
  const prepared = workshop.prepare(circuit);
  const { fullScaleVolts, sampleRateHertz } = workshop.opening;
  const factor = 10 ** (gainDecibels / 20);
  const volts = wholeVolts(workshop, prepared);
  const written = writeWav({
    samples: volts.map((value) => (value / fullScaleVolts) * factor),
    sampleRateHertz,
    format: '24',
    comment: soundComment(name, restPoint(prepared.circuit), fullScaleVolts, gainDecibels),
    ditherSeed: seed,
  });
  return new Uint8Array(written.bytes);
}

/** A fault as sentences for whoever set the value; anything else is a fault of the program and says so. */
export function faultTexts(error: unknown): string[] {
  if (error instanceof InputError) return error.faults.map(faultText);
  return [`A fault of the program, not of your value: ${error instanceof Error ? error.message : String(error)}`];
}
