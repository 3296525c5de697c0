/** Processor seconds of one job. */
export async function cpuSeconds(job: () => void | Promise<void>): Promise<number> {
  const start = process.cpuUsage();
  await job();
  const { user, system } = process.cpuUsage(start);
  return (user + system) / 1e6;
}

/**
 * Median of the processor seconds that a job takes over several runs, after one that is not counted: what one core is busy,
 * whatever else the machine does meanwhile.
 */
export async function medianSeconds(runs: number, job: () => void | Promise<void>): Promise<number> {
  await job();
  return medianOf(runs, () => cpuSeconds(job));
}

/** The same by the clock, for jobs that are processes of their own. */
export async function medianClockSeconds(runs: number, job: () => void | Promise<void>): Promise<number> {
  await job();
  return medianOf(runs, async () => {
    const start = performance.now();
    await job();
    return (performance.now() - start) / 1000;
  });
}

async function medianOf(runs: number, measure: () => Promise<number>): Promise<number> {
  const seconds: number[] = [];
  for (let k = 0; k < runs; k++) seconds.push(await measure());
  seconds.sort((a, b) => a - b);
  return seconds[Math.floor(runs / 2)] as number;
}
