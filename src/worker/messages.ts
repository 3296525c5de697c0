import type { HearingCurve } from '../engine/hearing/hearing-curves.ts';
import type { PlainKeys } from '../list/plain-layers.ts';
import type { Side } from '../page/page-data.ts';
import type { VariantResult } from '../results/result.ts';

/** A circuit as the page names it: the changes over the list, layer by layer. */
export interface WantedCircuit {
  readonly layers: readonly PlainKeys[];
}

/** What the page asks of the engine. */
export type ToWorker =
  | {
      readonly kind: 'open';
      readonly base: PlainKeys;
      readonly curves: readonly HearingCurve[];
      readonly sampleRateHertz: number;
      readonly sides: Readonly<Partial<Record<Side, Float64Array>>>;
      readonly quality: 'normal' | 'fine';
      readonly fullScaleVolts: number;
    }
  /** Renders: the part from a frame on first, then the whole. */
  | { readonly kind: 'sound'; readonly id: number; readonly circuit: WantedCircuit; readonly from: number }
  /** The programme as the station of this circuit sends it. */
  | { readonly kind: 'sent'; readonly id: number; readonly circuit: WantedCircuit }
  | { readonly kind: 'forget'; readonly id: number }
  | { readonly kind: 'figures'; readonly id: number; readonly name: string; readonly circuit: WantedCircuit }
  | {
      readonly kind: 'wav';
      readonly id: number;
      readonly name: string;
      readonly circuit: WantedCircuit;
      readonly gainDecibels: number;
      readonly seed: number;
    };

/** What the engine answers; sounds are samples re full scale. */
export type FromWorker =
  | { readonly kind: 'opened' }
  | { readonly kind: 'fault'; readonly id: number; readonly texts: readonly string[] }
  /** The next stretch of the part; the first says where it starts and how long it will be. */
  | {
      readonly kind: 'part';
      readonly id: number;
      readonly from: number;
      readonly length: number;
      readonly first: boolean;
      readonly samples: Float32Array;
    }
  | {
      readonly kind: 'whole';
      readonly id: number;
      readonly samples: Float32Array;
      readonly peak: number;
      readonly loudnessLufs: number | null;
    }
  | { readonly kind: 'figures'; readonly id: number; readonly variant: VariantResult }
  | { readonly kind: 'wav'; readonly id: number; readonly bytes: Uint8Array<ArrayBuffer> };
