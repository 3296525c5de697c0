import { faultTexts, figures, sent, wav } from './answers.ts';
import type { FromWorker, ToWorker } from './messages.ts';
import { type Stage, soundJob } from './sound-job.ts';
import { Workshop } from './workshop.ts';

/** The part of a worker's global scope that the engine's shell needs. */
interface WorkerScope {
  onmessage: ((event: { readonly data: ToWorker }) => void) | null;
  postMessage(message: FromWorker, transfer: readonly ArrayBufferLike[]): void;
  readonly MessageChannel: new () => { readonly port1: Port; readonly port2: Port };
}

interface Port {
  onmessage: (() => void) | null;
  postMessage(message: null): void;
}

interface Job {
  readonly id: number;
  stage: Stage | 'answer';
  readonly turns: Generator<Stage, void>;
}

const scope = globalThis as unknown as WorkerScope;
/** Its own messages come in turn with the page's, and at once, where a timer would wait 4 ms. */
const bell = new scope.MessageChannel();
const state: { workshop: Workshop | null; jobs: Job[]; waiting: boolean } = {
  workshop: null,
  jobs: [],
  waiting: false,
};

function post(message: FromWorker): void {
  const transfer = 'samples' in message ? [message.samples.buffer] : 'bytes' in message ? [message.bytes.buffer] : [];
  scope.postMessage(message, transfer);
}

/** Everything but sound is one turn. */
function* once(work: () => FromWorker): Generator<Stage, void> {
  yield 'part';
  post(work());
}

function jobFor(message: ToWorker, workshop: Workshop): Job | null {
  const answer = (work: () => FromWorker): Job | null =>
    'id' in message ? { id: message.id, stage: 'answer', turns: once(work) } : null;
  switch (message.kind) {
    case 'sound':
      return {
        id: message.id,
        stage: 'part',
        turns: soundJob(workshop, message.id, message.circuit, message.from, post),
      };
    case 'sent':
      return answer(() => sent(workshop, message.id, message.circuit));
    case 'figures':
      return answer(() => ({ kind: 'figures', id: message.id, variant: figures(workshop, message) }));
    case 'wav':
      return answer(() => ({ kind: 'wav', id: message.id, bytes: wav(workshop, message) }));
    default:
      return null;
  }
}

/** First stretches first, the newest before the others; then more of parts; then the rest in the order it was asked for. */
function nextJob(): Job | undefined {
  const newest = (stage: Stage): Job | undefined => state.jobs.findLast((job) => job.stage === stage);
  return newest('part') ?? newest('more') ?? state.jobs[0];
}

function turn(): void {
  state.waiting = false;
  const job = nextJob();
  if (!job) return;
  try {
    const { done, value } = job.turns.next();
    if (done) state.jobs = state.jobs.filter((other) => other !== job);
    else if (job.stage !== 'answer') job.stage = value;
  } catch (error) {
    state.jobs = state.jobs.filter((other) => other !== job);
    post({ kind: 'fault', id: job.id, texts: faultTexts(error) });
  }
  rouse();
}

/** Takes the next turn after whatever messages have come meanwhile. */
function rouse(): void {
  if (state.waiting || state.jobs.length === 0) return;
  state.waiting = true;
  bell.port2.postMessage(null);
}

bell.port1.onmessage = turn;
scope.onmessage = ({ data }) => {
  if (data.kind === 'open') {
    state.workshop = new Workshop(data);
    post({ kind: 'opened' });
  } else if (data.kind === 'forget') {
    state.jobs = state.jobs.filter((job) => job.id !== data.id);
  } else if (state.workshop) {
    const job = jobFor(data, state.workshop);
    if (job) state.jobs.push(job);
    rouse();
  }
};
