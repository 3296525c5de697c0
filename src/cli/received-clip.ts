import type { RestPoint } from '../engine/circuits/rest-point.ts';
import type { HearingCurve } from '../engine/hearing/hearing-curves.ts';
import { heardThrough } from '../engine/hearing/hearing-filter.ts';
import type { Quality } from '../engine/renderer/detector-renderer.ts';
import { type RenderedClip, renderClipInTurns } from '../engine/renderer/render-clip.ts';
import { renderOnAir } from '../engine/renderer/render-on-air.ts';
import type { TableStore } from '../engine/renderer/table-store.ts';
import type { OnTheAirRecord } from '../results/air-record.ts';
import type { OtherClips } from './air-input.ts';
import { airRecord } from './air-record.ts';
import type { RunVariant } from './list-input.ts';
import type { SentProgramme } from './sent-programme.ts';

export interface ToReceive {
  readonly variant: RunVariant;
  readonly programme: SentProgramme;
  readonly others: OtherClips;
  readonly rateHertz: number;
  readonly quality: Quality;
  /** No other variant needs the programme: its array may take the sound. */
  readonly last?: boolean;
}

/** A clip as it comes out of a variant's detector, with what is on the air besides. */
export interface ReceivedClip {
  readonly clip: RenderedClip;
  readonly onTheAir: OnTheAirRecord | null;
}

/** @param tell  told the share done, 0 to 1, and awaited */
export async function receivedClip(
  rest: RestPoint,
  tables: TableStore,
  { variant, programme, others, rateHertz, quality, last }: ToReceive,
  tell: (share: number) => Promise<void>,
): Promise<ReceivedClip> {
  const { modulation, before } = programme;
  const listed = variant.onTheAir;
  if (listed === null) {
    if (modulation.every((value) => value === 0)) return { clip: stillClip(modulation.length), onTheAir: null };
    const laws = tables.lawsFor(
      rest,
      modulation.reduce((most, value) => Math.max(most, value), 0),
    );
    const onBlock = (done: number): Promise<void> => tell(done / modulation.length);
    const into = last ? modulation : new Float64Array(modulation.length);
    const clip = await renderClipInTurns(rest, laws, modulation, rateHertz, quality, onBlock, null, into);
    return { clip, onTheAir: null };
  }
  const otherClip = others.get(listed.otherClip ?? '') ?? null;
  const request = { air: listed.air, otherClip, modulation, before, clipRateHertz: rateHertz, quality };
  const received = await renderOnAir(rest, tables, request, tell);
  return { clip: received.clip, onTheAir: airRecord(listed, received, rateHertz) };
}

/** The same as it is heard: through the variant's curve. */
export async function heardClip(
  rest: RestPoint,
  tables: TableStore,
  given: ToReceive,
  tell: (share: number) => Promise<void>,
): Promise<ReceivedClip> {
  const { clip, onTheAir } = await receivedClip(rest, tables, given, tell);
  return { clip: throughCurve(clip, given.variant.heard, given.rateHertz), onTheAir };
}

/** The rendered clip through a curve; flat is the clip itself. */
function throughCurve(clip: RenderedClip, curve: HearingCurve, rateHertz: number): RenderedClip {
  const volts = heardThrough(clip.volts, curve, rateHertz);
  if (volts === clip.volts) return clip;
  let peakVolts = 0;
  for (const value of volts) peakVolts = Math.max(peakVolts, Math.abs(value));
  return { ...clip, volts, peakVolts };
}

/** A carrier alone leaves the stage at rest. Rendered, its last digits would be brought up to full scale and heard. */
function stillClip(frames: number): RenderedClip {
  return { volts: new Float64Array(frames), peakVolts: 0, unsettledSteps: 0, passesPerStep: 0 };
}
