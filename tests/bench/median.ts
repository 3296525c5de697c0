/** Median of the seconds that a job takes over several runs, after one that is not counted. */
export async function medianSeconds(runs: number, job: () => void | Promise<void>): Promise<number> {
  await job();
  const seconds: number[] = [];
  for (let k = 0; k < runs; k++) {
    const start = performance.now();
    await job();
    seconds.push((performance.now() - start) / 1000);
  }
  seconds.sort((a, b) => a - b);
  return seconds[Math.floor(runs / 2)] as number;
}
