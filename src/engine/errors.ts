/**
 * What is wrong with something a person supplied. Data only: the sentence is made in one place, by the shell.
 *
 * `code` is stable; `where` names the key, flag, field or file; `got` is what was found; `expected` says what would
 * be right, with units and range; `hint` is an optional remedy or the nearest known name.
 */
export interface Fault {
  readonly code: string;
  readonly where: string;
  readonly got: string;
  readonly expected: string;
  readonly hint?: string;
  /** The parts list's name as the person gave it, where the fault stands in one. */
  readonly file?: string;
  /** Position in the parts list, counted from 1, where there is one. */
  readonly line?: number;
  readonly column?: number;
}

/** Thrown for wrong input. Carries every fault found, so that a person mends them in one pass. */
export class InputError extends Error {
  readonly faults: readonly Fault[];

  constructor(faults: Fault | readonly Fault[]) {
    const all = Array.isArray(faults) ? (faults as readonly Fault[]) : [faults as Fault];
    super(all.map((f) => `${f.where}: ${f.code}`).join('; '));
    this.name = 'InputError';
    this.faults = all;
  }
}
