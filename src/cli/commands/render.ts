import { availableParallelism } from 'node:os';
import { basename, join } from 'node:path';
import { type Analysis, analyse } from '../../engine/circuits/analysis.ts';
import type { Caution } from '../../engine/circuits/cautions.ts';
import type { RenderedClip } from '../../engine/renderer/render-clip.ts';
import { TableStore } from '../../engine/renderer/table-store.ts';
import type { Programme } from '../../engine/station/programme.ts';
import type { OnTheAirRecord } from '../../results/air-record.ts';
import { measuredRecord } from '../../results/measured-curve.ts';
import type { Result } from '../../results/result.ts';
import { resultJson } from '../../results/result-json.ts';
import { safeFileNames } from '../../results/safe-names.ts';
import { soundComment } from '../../results/sound-comment.ts';
import { variantResult } from '../../results/variant-result.ts';
import { writeWav } from '../../results/wav-write.ts';
import { clipAndList, clipFor, otherClips } from '../air-input.ts';
import { airSummary } from '../air-summary.ts';
import { EXIT, type Io } from '../io.ts';
import { type RunVariant, variantsFrom } from '../list-input.ts';
import { measuredFrom } from '../measured-input.ts';
import { ofVariant } from '../of-variant.ts';
import { openPage } from '../open-page.ts';
import { choice, flag, metersOf, type RawOptions, text, wavCoding, wholeNumber } from '../options.ts';
import { PAGE_FILE, pageFiles } from '../page-file.ts';
import { Progress } from '../progress.ts';
import { heardClip, type ReceivedClip } from '../received-clip.ts';
import { paperFiles } from '../result-files.ts';
import { checkFolder, folderName, type ResultFile, writeResults } from '../result-folder.ts';
import { type SentProgramme, sentProgramme, TEXT_RATE_HERTZ } from '../sent-programme.ts';
import { levelSounds } from '../sound-set.ts';
import { summaryText } from '../summary.ts';
import { openPool } from '../worker/pool.ts';

/** The main job: a clip through each variant. */
export async function render(
  first: string | null,
  second: string | null,
  options: RawOptions,
  io: Io,
): Promise<number> {
  const { clipPath, list } = clipAndList(first, second);
  const quiet = flag(options, 'quiet');
  const match = choice(options, 'match', ['level', 'loudness'], 'level');
  const quality = choice(options, 'quality', ['normal', 'fine'], 'normal');
  const format = wavCoding(options);
  const meters = metersOf(options);
  const variants = await variantsFrom(list, options);
  const clip = await clipFor({ clipPath, list }, variants);
  const others = await otherClips(variants, list);
  const rateHertz = clip?.sampleRateHertz ?? TEXT_RATE_HERTZ;
  const inputs = [clipPath, list].filter((path) => path !== null);
  const measured = await measuredFrom(options);
  const folder = text(options, 'out') ?? join('out', folderName(...(inputs.length > 0 ? inputs : ['morse'])));
  const readBesides = [text(options, 'measured'), ...[...others.values()].map(({ path }) => path)];
  await checkFolder(folder, ...inputs, ...readBesides.filter((path) => path !== null));
  for (const warning of clip?.warnings ?? []) if (!quiet) io.err(`${clipPath}: ${warning}\n`);

  const progress = new Progress(io, quiet);
  const programmes = new Map<string, SentProgramme>();
  const tables = new TableStore();
  const analyses: Analysis[] = [];
  const rendered: RenderedClip[] = [];
  const airs: (OnTheAirRecord | null)[] = [];
  let limitedSamples = 0;
  const seconds = (clip?.frames ?? 0) / rateHertz;
  const workers = workersFor(options, variants.length, seconds);
  const pool = workers > 1 ? await openPool(workers) : null;
  try {
    const given = variants.map((variant, k) => {
      const programme = sentProgramme(variant, clip, programmes);
      limitedSamples = Math.max(limitedSamples, programme.limitedSamples);
      return { variant, programme, others, rateHertz, quality, last: pool === null && k === variants.length - 1 };
    });
    // sounds on other threads, when there are any, while this one works out the tables
    const sounds = pool === null ? null : given.map((one) => pool.run('sound', one));
    for (const sound of sounds ?? []) sound.catch(() => {});
    for (const [k, one] of given.entries()) {
      const { variant, programme } = one;
      const analysis = ofVariant(variant.name, () => analyse(variant.circuit, variant.ratings, meters));
      await progress.breathe();
      const tell = (share: number): Promise<void> => {
        progress.tell(`rendering ${variant.name}`, (k + share) / variants.length);
        return progress.breathe();
      };
      const received =
        sounds === null
          ? await heardClip(analysis.rest, tables, one, tell)
          : await whileTelling(sounds[k] as Promise<ReceivedClip>, () => tell(0));
      analyses.push(withCautions(analysis, variant, programme, received.clip));
      airs.push(received.onTheAir);
      rendered.push(received.clip);
      await progress.breathe();
    }
  } finally {
    await pool?.close();
  }
  progress.clear();

  const levels = levelSounds(rendered, rateHertz, match);
  const stems = safeFileNames(variants.map((variant) => variant.name));
  const files: ResultFile[] = [];
  const result: Result = {
    format: 'presolder-result/1',
    clip: {
      file: clipPath === null ? 'Morse text' : basename(clipPath),
      seconds: Math.max(...rendered.map(({ volts }) => volts.length)) / rateHertz,
      sampleRateHertz: rateHertz,
      limitedSamples,
    },
    fullScaleVolts: levels.fullScaleVolts,
    ...(measured ? { measured: measuredRecord(measured) } : {}),
    variants: variants.map((variant, k) => {
      const sound = levels.sounds[k] as (typeof levels.sounds)[number];
      const analysis = analyses[k] as Analysis;
      const file = `${stems[k]}.wav`;
      const comment = soundComment(variant.name, analysis.rest, levels.fullScaleVolts, sound.gainDecibels);
      const written = writeWav({
        samples: sound.samples,
        sampleRateHertz: rateHertz,
        format,
        comment,
        ditherSeed: k + 1,
      });
      files.push({ name: file, contents: written.bytes });
      return variantResult(variant.name, variant.changes, analysis, {
        sound: {
          file,
          gainDecibels: sound.gainDecibels,
          loudnessLufs: sound.loudnessLufs,
          peakVolts: (rendered[k] as RenderedClip).peakVolts,
        },
        heard: variant.heard,
        measured,
        onTheAir: airs[k] ?? null,
      });
    }),
  };
  await progress.pause();
  // the page sends the clip through the circuits itself, and knows no other station
  const page = clip === null || airs.some((air) => air !== null) ? [] : pageFiles(result, variants, clip, quality);
  const { replaced } = await writeResults(folder, [...files, ...paperFiles(result), ...page]);
  if (flag(options, 'json')) io.out(resultJson(result));
  else if (!quiet) io.out(`${[summaryText(result), airSummary(result)].filter((part) => part !== '').join('\n')}\n`);
  if (!quiet) {
    io.err(
      `${replaced ? 'Replaced the earlier results in' : 'Wrote'} ${folder}: ${files.length} WAV files, tables, plot${page.length > 0 ? `, ${PAGE_FILE}` : ''}.\n`,
    );
    io.err('Turn the volume down before the first play: full scale is loud, and hearing does not grow back.\n');
  }
  if (flag(options, 'open')) {
    const failed =
      page.length === 0
        ? 'this run has no listening page (others on the air, Morse, or a clip over ten minutes)'
        : await openPage(join(folder, PAGE_FILE));
    if (failed !== null && !quiet) io.err(`Not opened: ${failed}.\n`);
  }
  return EXIT.done;
}

/** With what the parts themselves, the transmitter's limiter and the rendering give cause for. */
function withCautions(
  analysis: Analysis,
  variant: RunVariant,
  { limitedSamples }: Programme,
  { unsettledSteps, volts }: RenderedClip,
): Analysis {
  const limited: Caution[] = limitedSamples > 0 ? [{ code: 'limited', figure: limitedSamples, limit: 0 }] : [];
  const unsettled: Caution[] =
    unsettledSteps > 0 ? [{ code: 'unsettled', figure: unsettledSteps, limit: volts.length }] : [];
  return { ...analysis, cautions: [...analysis.cautions, ...variant.cautions, ...limited, ...unsettled] };
}

/** Shortest programme, all variants together, for which threads are started: they take a fifth of a second to. */
const POOLED_SECONDS = 60;

/** Threads for the sounds: as asked for, else a core a variant where there is enough to do. */
function workersFor(options: RawOptions, variants: number, seconds: number): number {
  const cores = availableParallelism();
  const asked = text(options, 'workers');
  if (asked === null) return seconds * variants < POOLED_SECONDS ? 1 : Math.min(cores, variants);
  return Math.min(wholeNumber(options, 'workers', cores, 1, 64), variants);
}

/** Awaits a sound, letting signals in meanwhile. */
async function whileTelling(sound: Promise<ReceivedClip>, tell: () => Promise<void>): Promise<ReceivedClip> {
  for (;;) {
    const made = await Promise.race([sound, new Promise<null>((resolve) => setTimeout(() => resolve(null), 100))]);
    if (made !== null) return made;
    await tell();
  }
}
