import { worker } from 'workerpool';
import { InputError } from '../../engine/errors.ts';
import { type Given, type JobKind, makeJobs } from './jobs.ts';
import type { Answer } from './pool.ts';

const jobs = makeJobs();

/** Does one piece of work. What is wrong with its input travels back as data: errors lose their faults on the way. */
async function work<Kind extends JobKind>(kind: Kind, given: Given<Kind>): Promise<Answer<Kind>> {
  try {
    return { made: await jobs[kind](given) };
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return { faults: error.faults };
  }
}

worker({ work });
