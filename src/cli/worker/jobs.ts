import type { DetectorCircuit } from '../../engine/circuits/circuit.ts';
import { restPoint } from '../../engine/circuits/rest-point.ts';
import { TableStore } from '../../engine/renderer/table-store.ts';
import { type CircuitOutcome, figuresWith } from '../../engine/spread/circuit-figures.ts';
import type { VariedPart } from '../../engine/spread/varied-parts.ts';
import { heardClip, type ReceivedClip, type ToReceive } from '../received-clip.ts';

/** One circuit with its parts off their values, as many times as there are rows of factors. */
export interface CircuitsJob {
  readonly circuit: DetectorCircuit;
  readonly parts: readonly VariedPart[];
  readonly factors: readonly (readonly number[])[];
}

/**
 * The kinds of work that can be done on another thread: what each is given and what it makes of it. Both are plain data,
 * and what is made depends on nothing but what was given, so that it is the same on any thread.
 */
export interface JobKinds {
  readonly circuits: { readonly given: CircuitsJob; readonly made: CircuitOutcome[] };
  readonly sound: { readonly given: ToReceive; readonly made: ReceivedClip };
}

export type JobKind = keyof JobKinds;
export type Given<Kind extends JobKind> = JobKinds[Kind]['given'];
export type Made<Kind extends JobKind> = JobKinds[Kind]['made'];

/** How each kind is done. */
export type Jobs = { readonly [Kind in JobKind]: (given: Given<Kind>) => Made<Kind> | Promise<Made<Kind>> };

/** The jobs of one thread, which keeps the tables that its sounds share. */
export function makeJobs(): Jobs {
  const tables = new TableStore();
  return {
    circuits: ({ circuit, parts, factors }) => factors.map((row) => figuresWith(circuit, parts, row)),
    sound: (given) => heardClip(restPoint(given.variant.circuit), tables, given, async () => {}),
  };
}
