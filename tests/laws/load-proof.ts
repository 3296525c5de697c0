import { expect } from 'vitest';
import { restCautions } from '../../src/engine/circuits/cautions.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { proveTone } from '../../src/engine/proof/tone-proof.ts';
import type { TableStore } from '../../src/engine/renderer/table-store.ts';
import type { LoadCase } from './load-cases.ts';

/** Codes of cautions that call the averaging doubtful: the limits are then not promised, only a decibel. */
const DOUBTS: readonly string[] = ['ripple', 'plate-harmonic'];

/** Holds one tone of one circuit to the program's own limits, renderer against every carrier cycle. */
export function expectProved({ circuit, hertz, depth }: LoadCase, tables: TableStore): void {
  const rest = restPoint(circuit);
  const proof = proveTone(rest, tables.lawsFor(rest, depth), hertz, depth);
  const { decibels, secondDifferencePercent, reference, limits } = proof;
  const figures = `${decibels.toFixed(4)} dB of ${limits.decibels}, second ${reference.secondPercent.toFixed(3)} % off by ${secondDifferencePercent.toFixed(4)}`;
  if (restCautions(rest, null).some(({ code }) => DOUBTS.includes(code))) {
    expect(Math.abs(decibels), figures).toBeLessThan(1);
  } else expect(proof.holds, figures).toBe(true);
}
