import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { type Fault, InputError } from '../../engine/errors.ts';
import { type Given, type JobKind, type Made, makeJobs } from './jobs.ts';

const CLOSED = 'the pool is closed';

/** What a worker sends back. */
export type Answer<Kind extends JobKind> = { readonly made: Made<Kind> } | { readonly faults: readonly Fault[] };

/** Workers that do jobs in any order. */
export interface WorkPool {
  readonly workers: number;
  /** Does one job. Rejects with what the job throws; once the pool is closed, with an error. */
  run<Kind extends JobKind>(kind: Kind, given: Given<Kind>): Promise<Made<Kind>>;
  /** Ends the workers at once, whatever they are doing. */
  close(): Promise<void>;
}

/** The worker's bundle beside the command's own; null when the program runs from its sources. */
export function workerFile(): string | null {
  const file = fileURLToPath(new URL('worker.mjs', import.meta.url));
  return existsSync(file) ? file : null;
}

/**
 * Starts a pool. With one worker, or no file to start others from, the work is done on this thread, one job at a time,
 * signals let in between them.
 *
 * @param workers  1 or more
 * @param file     the worker's bundle
 */
export async function openPool(workers: number, file: string | null = workerFile()): Promise<WorkPool> {
  return workers === 1 || file === null ? onThisThread() : onThreads(workers, file);
}

function onThisThread(): WorkPool {
  const jobs = makeJobs();
  let closed = false;
  let last: Promise<unknown> = Promise.resolve();
  return {
    workers: 1,
    run(kind, given) {
      const job = last.then(async () => {
        await new Promise((resolve) => setImmediate(resolve));
        if (closed) throw new Error(CLOSED);
        return jobs[kind](given);
      });
      last = job.catch(() => {});
      return job;
    },
    async close() {
      closed = true;
    },
  };
}

async function onThreads(workers: number, file: string): Promise<WorkPool> {
  const { pool } = await import('workerpool');
  // a thread at work hears no polite word: it is not waited for, so that Ctrl-C ends the command at once
  const threads = pool(file, { workerType: 'thread', maxWorkers: workers, workerTerminateTimeout: 100 });
  let closed = false;
  return {
    workers,
    async run<Kind extends JobKind>(kind: Kind, given: Given<Kind>) {
      // a job after the end would start a worker that nobody ends
      if (closed) throw new Error(CLOSED);
      const answer = (await threads.exec('work', [kind, given])) as Answer<Kind>;
      if ('faults' in answer) throw new InputError(answer.faults);
      return answer.made;
    },
    async close() {
      closed = true;
      await threads.terminate(true);
    },
  };
}
