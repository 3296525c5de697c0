import { analyse } from '../../engine/circuits/analysis.ts';
import { measuredRecord } from '../../results/measured-curve.ts';
import { responseMarkdown } from '../../results/response-markdown.ts';
import type { Result, VariantResult } from '../../results/result.ts';
import { resultJson } from '../../results/result-json.ts';
import { sensitivitySvg } from '../../results/sensitivity-plot.ts';
import { variantResult } from '../../results/variant-result.ts';
import { EXIT, type Io } from '../io.ts';
import { variantsFrom } from '../list-input.ts';
import { measuredFrom } from '../measured-input.ts';
import { ofVariant } from '../of-variant.ts';
import { flag, metersOf, type RawOptions, text } from '../options.ts';
import { Progress } from '../progress.ts';
import { paperFiles } from '../result-files.ts';
import { checkFolder, type ResultFile, writeResults } from '../result-folder.ts';
import { summaryText } from '../summary.ts';

/** Everything on paper, no clip. */
export async function respond(list: string | null, options: RawOptions, io: Io): Promise<number> {
  const meters = metersOf(options);
  const variants = await variantsFrom(list, options);
  const measured = await measuredFrom(options);
  const folder = text(options, 'out');
  const inputs = [list, text(options, 'measured')].filter((path) => path !== null);
  if (folder !== null) await checkFolder(folder, ...inputs);
  const progress = new Progress(io, flag(options, 'quiet'));
  const results: VariantResult[] = [];
  for (const [k, variant] of variants.entries()) {
    progress.tell(`analysing ${variant.name}`, k / variants.length);
    const analysis = ofVariant(variant.name, () => analyse(variant.circuit, variant.ratings, meters));
    const cautions = [...analysis.cautions, ...variant.cautions];
    const more = { heard: variant.heard, measured };
    results.push(variantResult(variant.name, variant.changes, { ...analysis, cautions }, more));
    await progress.breathe();
  }
  progress.clear();
  const result: Result = {
    format: 'presolder-result/1',
    ...(measured ? { measured: measuredRecord(measured) } : {}),
    variants: results,
  };
  await progress.pause();
  const replaced =
    folder === null ? false : (await writeResults(folder, [...paperFiles(result), sensitivityFile(result)])).replaced;
  if (flag(options, 'json')) io.out(resultJson(result));
  else io.out(`${responseMarkdown(result)}\n${summaryText(result)}\n`);
  if (folder !== null && !flag(options, 'quiet')) {
    io.err(`${replaced ? 'Replaced the earlier results in' : 'Wrote tables and plot to'} ${folder}\n`);
  }
  return EXIT.done;
}

/** The plot on which detectors are compared: audio out and distortion against carrier level. */
function sensitivityFile(result: Result): ResultFile {
  return { name: 'sensitivity.svg', contents: sensitivitySvg(result) };
}
