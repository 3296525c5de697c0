import { dirname, isAbsolute, join } from 'node:path';
import { InputError } from '../engine/errors.ts';
import type { OtherClip } from '../engine/station/on-the-air.ts';
import { toMono } from '../engine/station/programme.ts';
import type { ReadSound } from '../results/wav-read.ts';
import { readClip } from './clip-read.ts';
import type { RunVariant } from './list-input.ts';

/** What a command line names: a clip and a list, either of which may be missing. */
export interface Named {
  readonly clipPath: string | null;
  readonly list: string | null;
}

/** One name alone that is a parts list's is the list: a Morse text needs no clip. */
export function clipAndList(first: string | null, second: string | null): Named {
  if (second === null && first !== null && /\.ya?ml$/i.test(first)) return { clipPath: null, list: first };
  return { clipPath: first, list: second };
}

/** The clip, or null where every variant sends a text. Throws InputError `no-clip`, `clip-unused`, those of `readClip`. */
export async function clipFor({ clipPath, list }: Named, variants: readonly RunVariant[]): Promise<ReadSound | null> {
  const wants = variants.find(({ onTheAir }) => onTheAir === null || !sendsText(onTheAir.keying));
  if (clipPath === null) {
    if (wants === undefined) return null;
    throw new InputError({
      code: 'no-clip',
      where: list ?? 'render',
      got: list === null ? 'no clip' : 'a parts list and no clip',
      expected: 'a clip before the parts list, or a text to be sent in Morse: --morse, or on the list',
      ...(variants.length > 1 ? { hint: `${JSON.stringify(wants.name)} is a programme's` } : {}),
    });
  }
  if (wants === undefined) {
    throw new InputError({
      code: 'clip-unused',
      where: clipPath,
      got: 'a clip where a Morse text is sent',
      expected: "one of the two; to key by the clip, say 'keyed by: clip'",
    });
  }
  return readClip(clipPath);
}

function sendsText(keying: NonNullable<RunVariant['onTheAir']>['keying']): boolean {
  return keying !== null && keying !== 'clip';
}

/** Clips of second stations by the name that the list gives them, each with the path that was read. */
export type OtherClips = ReadonlyMap<string, OtherClip & { readonly path: string }>;

/** Reads the second stations' clips, beside the list where there is one. Throws InputError of `readClip`. */
export async function otherClips(variants: readonly RunVariant[], list: string | null): Promise<OtherClips> {
  const names = new Set(variants.flatMap(({ onTheAir }) => onTheAir?.otherClip ?? []));
  const read = [...names].map(async (name) => {
    const path = list === null || isAbsolute(name) ? name : join(dirname(list), name);
    const { channels, sampleRateHertz } = await readClip(path);
    return [name, { path, samples: toMono(channels, 'both'), rateHertz: sampleRateHertz }] as const;
  });
  return new Map(await Promise.all(read));
}
