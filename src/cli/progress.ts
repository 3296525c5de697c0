import { type Io, Stopped } from './io.ts';

/** Shortest time between two rewrites of the line, ms: often enough to look alive, seldom enough to cost nothing. */
const REWRITE_MILLISECONDS = 100;

/** A progress line on the terminal; silent elsewhere. Also the place where a long job yields and can be stopped. */
export class Progress {
  private readonly io: Io;
  private readonly shown: boolean;
  private last = 0;
  private lastYield = 0;

  constructor(io: Io, quiet: boolean) {
    this.io = io;
    this.shown = io.talkIsTerminal && !quiet;
  }

  /** Tells how far `what` has come, 0 to 1. Throws Stopped after Ctrl-C. */
  tell(what: string, share: number): void {
    this.stopIfAsked();
    const now = performance.now();
    if (!this.shown || (share < 1 && now - this.last < REWRITE_MILLISECONDS)) return;
    this.last = now;
    const width = 24;
    const done = Math.round(width * Math.min(Math.max(share, 0), 1));
    this.io.err(`\r\u001b[K${what} ${'='.repeat(done)}${'.'.repeat(width - done)} ${Math.round(100 * share)} %`);
  }

  /** Lets signals and timers in; to be awaited between pieces of work. */
  async breathe(): Promise<void> {
    const now = performance.now();
    if (now - this.lastYield < REWRITE_MILLISECONDS) return;
    await new Promise((resolve) => setImmediate(resolve));
    this.lastYield = performance.now();
  }

  /** Lets signals in, then throws Stopped if one asked for it: the last moment before results are written. */
  async pause(): Promise<void> {
    await new Promise((resolve) => setImmediate(resolve));
    this.stopIfAsked();
  }

  private stopIfAsked(): void {
    if (!this.io.stopRequested()) return;
    this.clear();
    throw new Stopped();
  }

  clear(): void {
    if (this.shown && this.last > 0) this.io.err('\r\u001b[K');
    this.last = 0;
  }
}
