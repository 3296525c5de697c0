/** Everything the command does to the world, so that tests can stand in for it. */
export interface Io {
  /** Results: standard output. */
  out(text: string): void;
  /** Talk: standard error. */
  err(text: string): void;
  /** Whether talk goes to a terminal, where a progress line can be rewritten. */
  readonly talkIsTerminal: boolean;
  /** Whether a stop was asked for (Ctrl-C). */
  stopRequested(): boolean;
}

/** Thrown between blocks of work after Ctrl-C: nothing has been written, nothing is left behind. */
export class Stopped extends Error {
  constructor() {
    super('stopped');
    this.name = 'Stopped';
  }
}

/** Exit statuses of the command. */
export const EXIT = { done: 0, fault: 1, input: 2, notMet: 3, stopped: 130 } as const;
