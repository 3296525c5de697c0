import type { Progress } from './progress.ts';

/** Runs a search that yields how far it has come, telling of it and letting signals in between its pieces. */
export async function driven<Answer>(
  search: Generator<number, Answer>,
  progress: Progress,
  what: string,
  from = 0,
  to = 1,
): Promise<Answer> {
  for (;;) {
    const step = search.next();
    if (step.done) return step.value;
    progress.tell(what, from + step.value * (to - from));
    await progress.breathe();
  }
}
