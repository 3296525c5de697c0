import type { Io } from './io.ts';
import { run } from './run.ts';

const stop = new AbortController();
process.once('SIGINT', () => {
  stop.abort();
  // a second Ctrl-C ends at once: results are renamed into place whole, so nothing half written can stay
  process.once('SIGINT', () => process.exit(130));
});

/** A reader that closed the pipe (head, a pager) is no fault: the rest is not wanted. */
process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  if (error.code === 'EPIPE') process.exit(0);
  throw error;
});

const io: Io = {
  out: (text) => {
    process.stdout.write(text);
  },
  err: (text) => {
    process.stderr.write(text);
  },
  talkIsTerminal: process.stderr.isTTY === true,
  stopRequested: () => stop.signal.aborted,
};

process.exitCode = await run(process.argv.slice(2), io);
