import { createHash } from 'node:crypto';
import { HEARING_NAMES } from '../engine/hearing/hearing-curves.ts';
import { bytesOfSamples, losslessCoding } from '../page/clip-coding.ts';
import type { PageData, Side } from '../page/page-data.ts';
import { pageText, policyFor } from '../page/page-text.ts';
import type { Result } from '../results/result.ts';
import type { ReadSound } from '../results/wav-read.ts';
import type { RunVariant } from './list-input.ts';
import type { ResultFile } from './result-folder.ts';
import { PAGE_SCRIPTS } from './stubs/page-scripts.ts';

/** Name of the page in the result folder. */
export const PAGE_FILE = 'listening.html';

/** Longest clip that a page carries, frames: ten minutes at 48 kHz make a file of 77 MB, which browsers still open. */
const MOST_FRAMES = 600 * 48_000;

/** The listening page of a run; none where the program was not built, or for a clip that is too long for a page. */
export function pageFiles(
  result: Result,
  variants: readonly RunVariant[],
  clip: ReadSound,
  quality: 'normal' | 'fine',
): ResultFile[] {
  if (PAGE_SCRIPTS === null || clip.frames > MOST_FRAMES) return [];
  const policy = policyFor(PAGE_SCRIPTS, (text) => createHash('sha256').update(text).digest('base64'));
  return [
    {
      name: PAGE_FILE,
      contents: pageText({ ...PAGE_SCRIPTS, policy }, pageData(result, variants, clip, quality)),
    },
  ];
}

/** What the page carries: the clip without loss, the list with its variants as written, and the result. */
export function pageData(
  result: Result,
  variants: readonly RunVariant[],
  clip: ReadSound,
  quality: 'normal' | 'fine',
): PageData {
  const sides = [...new Set(variants.map((variant) => variant.sending.side))];
  const own = variants.map(({ heard }) => heard).filter(({ name }) => !HEARING_NAMES.includes(name));
  return {
    format: 'presolder-page/1',
    name: variants[0]?.listName ?? '',
    clip: {
      file: result.clip?.file ?? '',
      sampleRateHertz: clip.sampleRateHertz,
      frames: clip.frames,
      sides: Object.fromEntries(sides.map((side) => [side, coded(clip, side)])),
    },
    quality,
    fullScaleVolts: result.fullScaleVolts ?? 1,
    base: variants[0]?.layers[0] ?? {},
    curves: own.filter((curve, k) => own.findIndex(({ name }) => name === curve.name) === k),
    variants: variants.map((variant, k) => ({
      layers: variant.layers.slice(1),
      result: result.variants[k] as Result['variants'][number],
    })),
    measured: result.measured ?? null,
    notes: '',
  };
}

function coded(clip: ReadSound, side: Side): { coding: ReturnType<typeof losslessCoding>; base64: string } {
  const mono = clip.mono(side);
  const coding = losslessCoding(mono);
  const { buffer, byteOffset, byteLength } = bytesOfSamples(mono, coding);
  return { coding, base64: Buffer.from(buffer, byteOffset, byteLength).toString('base64') };
}
