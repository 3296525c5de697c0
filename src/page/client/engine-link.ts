import type { FromWorker, ToWorker } from '../../worker/messages.ts';

type Opening = Extract<ToWorker, { kind: 'open' }>;
type Answer = Exclude<FromWorker, { kind: 'opened' }>;
type Wanted = Exclude<ToWorker, { kind: 'open' } | { kind: 'forget' }>;
/** A request without the number that the link gives it. */
export type Request = Wanted extends infer One ? (One extends Wanted ? Omit<One, 'id'> : never) : never;

/** Most workers: each keeps tables and a copy of the clip. */
const MOST_WORKERS = 4;

/** The engine in workers of its own, so that the page never waits. */
export class EngineLink {
  private readonly workers: Worker[] = [];
  private readonly load: number[] = [];
  private readonly asked = new Map<number, { worker: number; onAnswer: (answer: Answer) => void }>();
  private last = 0;

  constructor(programText: string, opening: Opening) {
    const address = URL.createObjectURL(new Blob([programText], { type: 'text/javascript' }));
    const count = Math.min(MOST_WORKERS, Math.max(1, navigator.hardwareConcurrency || 1));
    for (let n = 0; n < count; n++) {
      const worker = new Worker(address);
      worker.onmessage = ({ data }: MessageEvent<FromWorker>) => this.take(data);
      worker.postMessage(opening);
      this.workers.push(worker);
      this.load.push(0);
    }
  }

  /**
   * Asks; the answers come one or several to `onAnswer`.
   *
   * @param urgent  goes to the first worker, which interrupts whatever it does; else to the one with least to do
   * @returns       the request's number, by which it can be forgotten
   */
  ask(request: Request, onAnswer: (answer: Answer) => void, urgent = false): number {
    const id = ++this.last;
    const worker = urgent ? 0 : this.idlest();
    this.asked.set(id, { worker, onAnswer });
    this.load[worker] = (this.load[worker] as number) + 1;
    this.workers[worker]?.postMessage({ ...request, id });
    return id;
  }

  /** Drops a request; no answer to it will come. */
  forget(id: number): void {
    const asked = this.asked.get(id);
    if (!asked) return;
    this.workers[asked.worker]?.postMessage({ kind: 'forget', id } satisfies ToWorker);
    this.finish(id);
  }

  private take(message: FromWorker): void {
    if (message.kind === 'opened') return;
    const asked = this.asked.get(message.id);
    if (!asked) return;
    if (message.kind !== 'part') this.finish(message.id);
    asked.onAnswer(message);
  }

  private finish(id: number): void {
    const asked = this.asked.get(id);
    if (!asked) return;
    this.asked.delete(id);
    this.load[asked.worker] = (this.load[asked.worker] as number) - 1;
  }

  /** The last of those with least to do: the first is kept free for what is urgent. */
  private idlest(): number {
    return this.load.reduce((best, load, k) => (load <= (this.load[best] as number) ? k : best), 0);
  }
}
