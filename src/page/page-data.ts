import type { HearingCurve } from '../engine/hearing/hearing-curves.ts';
import type { PlainKeys } from '../list/plain-layers.ts';
import type { MeasuredRecord, Result, VariantResult } from '../results/result.ts';
import type { CodedSamples } from './clip-coding.ts';

/** The side of the clip that a station sends. */
export type Side = 'both' | 'left' | 'right';

/** A variant of the page: what it changes, layer by layer over the list, and what came of it. */
export interface PageVariant {
  readonly layers: readonly PlainKeys[];
  readonly result: VariantResult;
}

/** Everything that a page carries besides its program. */
export interface PageData {
  readonly format: 'presolder-page/1';
  /** Name of the parts list; empty when it has none. */
  readonly name: string;
  readonly clip: {
    readonly file: string;
    readonly sampleRateHertz: number;
    readonly frames: number;
    /** Programme before the transmitter, mono, for every side that some variant sends. */
    readonly sides: Readonly<Partial<Record<Side, CodedSamples>>>;
  };
  readonly quality: 'normal' | 'fine';
  /** Volts that stand at full scale, as in the result. */
  readonly fullScaleVolts: number;
  /** The list's own keys, over which the variants lie. */
  readonly base: PlainKeys;
  /** Hearing curves of the builder's own, by the name the list calls them. */
  readonly curves: readonly HearingCurve[];
  readonly variants: readonly PageVariant[];
  /** A response measured on a real set; null when there is none. */
  readonly measured: MeasuredRecord | null;
  /** The builder's own words. */
  readonly notes: string;
}

/** The result of the page's variants, as tables and files are made from it. */
export function resultOf(data: Pick<PageData, 'clip' | 'fullScaleVolts' | 'measured' | 'variants'>): Result {
  const { clip, fullScaleVolts, measured, variants } = data;
  return {
    format: 'presolder-result/1',
    clip: {
      file: clip.file,
      seconds: clip.frames / clip.sampleRateHertz,
      sampleRateHertz: clip.sampleRateHertz,
      limitedSamples: 0,
    },
    fullScaleVolts,
    ...(measured ? { measured } : {}),
    variants: variants.map((variant) => variant.result),
  };
}
