import { basename, join } from 'node:path';
import { type Analysis, analyse } from '../../engine/circuits/analysis.ts';
import type { Caution } from '../../engine/circuits/cautions.ts';
import type { HearingCurve } from '../../engine/hearing/hearing-curves.ts';
import { heardThrough } from '../../engine/hearing/hearing-filter.ts';
import { type RenderedClip, renderClipInTurns } from '../../engine/renderer/render-clip.ts';
import { TableStore } from '../../engine/renderer/table-store.ts';
import { preEmphasise } from '../../engine/station/pre-emphasis.ts';
import { type Programme, programmeFrom, toMono } from '../../engine/station/programme.ts';
import { measuredRecord } from '../../results/measured-curve.ts';
import type { Result } from '../../results/result.ts';
import { resultJson } from '../../results/result-json.ts';
import { safeFileNames } from '../../results/safe-names.ts';
import { soundComment } from '../../results/sound-comment.ts';
import { variantResult } from '../../results/variant-result.ts';
import type { ReadSound } from '../../results/wav-read.ts';
import { writeWav } from '../../results/wav-write.ts';
import { readClip } from '../clip-read.ts';
import { EXIT, type Io } from '../io.ts';
import { type RunVariant, variantsFrom } from '../list-input.ts';
import { measuredFrom } from '../measured-input.ts';
import { ofVariant } from '../of-variant.ts';
import { choice, flag, type RawOptions, text, wavCoding } from '../options.ts';
import { PAGE_FILE, pageFiles } from '../page-file.ts';
import { Progress } from '../progress.ts';
import { paperFiles } from '../result-files.ts';
import { checkFolder, folderName, type ResultFile, writeResults } from '../result-folder.ts';
import { levelSounds } from '../sound-set.ts';
import { summaryText } from '../summary.ts';

/** The main job: a clip through each variant. */
export async function render(clipPath: string, list: string | null, options: RawOptions, io: Io): Promise<number> {
  const quiet = flag(options, 'quiet');
  const match = choice(options, 'match', ['level', 'loudness'], 'level');
  const quality = choice(options, 'quality', ['normal', 'fine'], 'normal');
  const format = wavCoding(options);
  const variants = await variantsFrom(list, options);
  const clip = await readClip(clipPath);
  const inputs = list === null ? [clipPath] : [clipPath, list];
  const measured = await measuredFrom(options);
  const folder = text(options, 'out') ?? join('out', folderName(...inputs));
  await checkFolder(folder, ...inputs, ...[text(options, 'measured')].filter((path) => path !== null));
  for (const warning of clip.warnings) if (!quiet) io.err(`${clipPath}: ${warning}\n`);

  const progress = new Progress(io, quiet);
  const programmes = new Map<string, Programme>();
  const tables = new TableStore();
  const analyses: Analysis[] = [];
  const rendered: RenderedClip[] = [];
  let limitedSamples = 0;
  for (const [k, variant] of variants.entries()) {
    const programme = programmeFor(variant, clip, programmes);
    limitedSamples = Math.max(limitedSamples, programme.limitedSamples);
    const analysis = ofVariant(variant.name, () => analyse(variant.circuit, variant.ratings));
    analyses.push(withCautions(analysis, variant, programme));
    await progress.breathe();
    const laws = tables.lawsFor(analysis.rest, largest(programme.modulation));
    const total = programme.modulation.length;
    const heard = programme.modulation.every((value) => value === 0)
      ? stillClip(total)
      : await renderClipInTurns(analysis.rest, laws, programme.modulation, clip.sampleRateHertz, quality, (done) => {
          progress.tell(`rendering ${variant.name}`, (k + done / Math.max(total, 1)) / variants.length);
          return progress.breathe();
        });
    rendered.push(throughCurve(heard, variant.heard, clip.sampleRateHertz));
    await progress.breathe();
  }
  progress.clear();

  const levels = levelSounds(rendered, clip.sampleRateHertz, match);
  const stems = safeFileNames(variants.map((variant) => variant.name));
  const files: ResultFile[] = [];
  const result: Result = {
    format: 'presolder-result/1',
    clip: {
      file: basename(clipPath),
      seconds: clip.frames / clip.sampleRateHertz,
      sampleRateHertz: clip.sampleRateHertz,
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
        sampleRateHertz: clip.sampleRateHertz,
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
      });
    }),
  };
  await progress.pause();
  const page = pageFiles(result, variants, clip, quality);
  const { replaced } = await writeResults(folder, [...files, ...paperFiles(result), ...page]);
  if (flag(options, 'json')) io.out(resultJson(result));
  else if (!quiet) io.out(`${summaryText(result)}\n`);
  if (!quiet) {
    io.err(
      `${replaced ? 'Replaced the earlier results in' : 'Wrote'} ${folder}: ${files.length} WAV files, tables, plot${page.length > 0 ? `, ${PAGE_FILE}` : ''}.\n`,
    );
    io.err('Turn the volume down before the first play: full scale is loud, and hearing does not grow back.\n');
  }
  return EXIT.done;
}

/** The clip as this variant's station sends it; variants with the same station share one. */
function programmeFor(variant: RunVariant, clip: ReadSound, kept: Map<string, Programme>): Programme {
  const { preEmphasis, channelLimit, side } = variant.sending;
  const depth = variant.circuit.station.modulation;
  const key = `${preEmphasis} ${channelLimit} ${side} ${depth}`;
  const found = kept.get(key);
  if (found) return found;
  const mono = toMono(clip.channels, side);
  const shaped = preEmphasise(mono, clip.sampleRateHertz, preEmphasis, channelLimit);
  const made = programmeFrom(shaped, depth);
  kept.set(key, made);
  return made;
}

/** With what the parts themselves and the transmitter's limiter give cause for. */
function withCautions(analysis: Analysis, variant: RunVariant, { limitedSamples }: Programme): Analysis {
  const limited: Caution[] = limitedSamples > 0 ? [{ code: 'limited', figure: limitedSamples, limit: 0 }] : [];
  return { ...analysis, cautions: [...analysis.cautions, ...variant.cautions, ...limited] };
}

/** A carrier alone leaves the stage at rest. Rendered, its last digits would be brought up to full scale and heard. */
function stillClip(frames: number): RenderedClip {
  return { volts: new Float64Array(frames), peakVolts: 0, unsettledSteps: 0, passesPerStep: 0 };
}

/** The rendered clip as it is heard; flat is the clip itself. */
function throughCurve(clip: RenderedClip, curve: HearingCurve, rateHertz: number): RenderedClip {
  const volts = heardThrough(clip.volts, curve, rateHertz);
  if (volts === clip.volts) return clip;
  return { ...clip, volts, peakVolts: Math.max(largest(volts), largest(volts.map((value) => -value))) };
}

function largest(samples: Float64Array): number {
  let most = 0;
  for (const value of samples) if (value > most) most = value;
  return most;
}
