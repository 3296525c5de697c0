import { availableParallelism } from 'node:os';
import { restCautions } from '../../engine/circuits/cautions.ts';
import type { DetectorCircuit } from '../../engine/circuits/circuit.ts';
import { restPoint } from '../../engine/circuits/rest-point.ts';
import { type CircuitOutcome, circuitFigures } from '../../engine/spread/circuit-figures.ts';
import { gatherSpread, planCorners, planSpread } from '../../engine/spread/spread.ts';
import type { VariedPart } from '../../engine/spread/varied-parts.ts';
import { statedTolerances } from '../../list/stated-tolerances.ts';
import { cautionText } from '../../results/caution-text.ts';
import { resultJson } from '../../results/result-json.ts';
import { spreadCsv } from '../../results/spread-csv.ts';
import { spreadMarkdown } from '../../results/spread-markdown.ts';
import { spreadSvg } from '../../results/spread-plot.ts';
import { type SpreadResult, type SpreadVariant, spreadVariant } from '../../results/spread-result.ts';
import { EXIT, type Io } from '../io.ts';
import { type RunVariant, variantsFrom } from '../list-input.ts';
import { ofVariant } from '../of-variant.ts';
import { choice, flag, type RawOptions, text, wholeNumber } from '../options.ts';
import { Progress } from '../progress.ts';
import { checkFolder, writeResults } from '../result-folder.ts';
import { spreadSummary } from '../spread-summary.ts';
import { openPool, type WorkPool } from '../worker/pool.ts';

/** Circuits of one job: a few tens of milliseconds, so that progress moves and a stop is heard. */
const CIRCUITS_A_JOB = 5;
const LEAST_RUNS = 50;
const MOST_RUNS = 100_000;
const MOST_WORKERS = 64;

/** What part tolerances do to each variant. */
export async function spread(list: string | null, options: RawOptions, io: Io): Promise<number> {
  const runs = wholeNumber(options, 'runs', 500, LEAST_RUNS, MOST_RUNS);
  const seed = wholeNumber(options, 'seed', 1, 0, Number.MAX_SAFE_INTEGER);
  const cores = Math.min(availableParallelism(), MOST_WORKERS);
  const workers = wholeNumber(options, 'workers', cores, 1, MOST_WORKERS);
  const age = choice(options, 'parts', ['old', 'new'], 'old');
  const variants = await variantsFrom(list, options);
  const folder = text(options, 'out');
  if (folder !== null) await checkFolder(folder, ...(list === null ? [] : [list]));
  const progress = new Progress(io, flag(options, 'quiet'));
  const pool = await openPool(workers);
  const found: SpreadVariant[] = [];
  try {
    for (const [k, variant] of variants.entries()) {
      const told = (share: number): void => progress.tell(`spreading ${variant.name}`, (k + share) / variants.length);
      found.push(await spreadOf(variant, { age, seed, runs }, pool, told));
    }
  } finally {
    await pool.close();
  }
  progress.clear();
  const result: SpreadResult = { format: 'presolder-spread/1', runs, seed, parts: age, variants: found };
  await progress.pause();
  const files = [
    { name: 'spread.json', contents: resultJson(result) },
    { name: 'spread.csv', contents: spreadCsv(result) },
    { name: 'spread.md', contents: spreadMarkdown(result) },
    { name: 'spread.svg', contents: spreadSvg(result) },
  ];
  const replaced = folder === null ? false : (await writeResults(folder, files)).replaced;
  io.out(flag(options, 'json') ? resultJson(result) : `${spreadSummary(result)}\n`);
  if (folder !== null && !flag(options, 'quiet')) {
    io.err(`${replaced ? 'Replaced the earlier results in' : 'Wrote tables and plot to'} ${folder}\n`);
  }
  return EXIT.done;
}

/** The spread of one variant, its circuits worked out by the pool. */
export async function spreadOf(
  variant: RunVariant,
  { age, seed, runs }: { readonly age: 'old' | 'new'; readonly seed: number; readonly runs: number },
  pool: WorkPool,
  told: (share: number) => void,
): Promise<SpreadVariant> {
  const { circuit, name } = variant;
  const plan = planSpread({ circuit, stated: statedTolerances(variant.layers), age, seed, runs });
  const [rest, nominal] = ofVariant(name, () => [restPoint(circuit), circuitFigures(circuit)] as const);
  const outcomes = await outcomesOf(circuit, plan.parts, plan.factors, pool, told);
  const factors = planCorners(plan, nominal, outcomes);
  const corners = { factors, outcomes: await outcomesOf(circuit, plan.parts, factors, pool, () => told(1)) };
  const gathered = ofVariant(name, () => gatherSpread(plan, nominal, outcomes, corners));
  const cautions = [...restCautions(rest, variant.ratings), ...variant.cautions].map(cautionText);
  return spreadVariant(name, variant.changes, rest, gathered, cautions);
}

/** Outcomes of all rows of factors in their order, whoever worked them out and when. */
async function outcomesOf(
  circuit: DetectorCircuit,
  parts: readonly VariedPart[],
  factors: readonly (readonly number[])[],
  pool: WorkPool,
  told: (share: number) => void,
): Promise<CircuitOutcome[]> {
  let done = 0;
  const jobs = Array.from({ length: Math.ceil(factors.length / CIRCUITS_A_JOB) }, async (_, k) => {
    const rows = factors.slice(k * CIRCUITS_A_JOB, (k + 1) * CIRCUITS_A_JOB);
    const made = await pool.run('circuits', { circuit, parts, factors: rows });
    done += rows.length;
    told(done / factors.length);
    return made;
  });
  return (await Promise.all(jobs)).flat();
}
