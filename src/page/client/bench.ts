import { matchedGains, setGain } from '../../engine/measure/matched-levels.ts';
import type { PlainKeys } from '../../list/plain-layers.ts';
import type { VariantResult } from '../../results/result.ts';
import type { PageData } from '../page-data.ts';
import type { EngineLink } from './engine-link.ts';
import type { PlayerLink } from './player-link.ts';

/** Something that can be heard: a variant, the one on the bench, or the programme as sent. */
export interface Heard {
  readonly kind: 'variant' | 'bench' | 'sent';
  name: string;
  readonly layers: readonly PlainKeys[];
  /** Figures; null for the programme, and for the bench until they have come. */
  result: VariantResult | null;
  /** Request that renders it. */
  request: number;
  part: boolean;
  whole: boolean;
  /** Largest magnitude re full scale and loudness, as far as they are known. */
  peak: number;
  loudnessLufs: number | null;
  gainDecibels: number;
}

export type Matching = 'level' | 'loudness';

export const BENCH_NAME = 'On the bench';
export const SENT_NAME = 'As sent';
/** Most variants that are kept: as many as a run of the command has. */
export const MOST_VARIANTS = 24;

/** The sounds of the page and which of them is heard. It renders through the engine and plays through the player. */
export class Bench {
  readonly variants: Heard[];
  readonly sent: Heard;
  bench: Heard | null = null;
  selected: Heard;
  matching: Matching = 'level';
  position = 0;
  /** What was on the bench before, heard until the present one can be. */
  private fallback: Heard | null = null;
  /** The bench whose figures were asked for. */
  private figuresOf: Heard | null = null;
  /** The variant that the bench came from. */
  private origin: Heard | null = null;
  private readonly frames: number;
  private readonly engine: EngineLink;
  private readonly player: PlayerLink;
  private readonly onChange: () => void;
  private readonly onFault: (texts: readonly string[]) => void;

  constructor(
    data: PageData,
    engine: EngineLink,
    player: PlayerLink,
    onChange: () => void,
    onFault: (texts: readonly string[]) => void,
  ) {
    this.frames = data.clip.frames;
    this.engine = engine;
    this.player = player;
    this.onChange = onChange;
    this.onFault = onFault;
    this.variants = data.variants.map(({ layers, result }) => this.made('variant', result.name, layers, result));
    for (const variant of this.variants) {
      const sound = variant.result?.sound;
      if (!sound) continue;
      variant.peak = sound.peakVolts / data.fullScaleVolts;
      variant.loudnessLufs = sound.loudnessLufs === null ? null : sound.loudnessLufs - sound.gainDecibels;
    }
    const first = this.variants[0] as Heard;
    this.sent = this.made('sent', SENT_NAME, first.layers, null);
    this.selected = first;
  }

  get all(): Heard[] {
    return [...this.variants, ...(this.bench ? [this.bench] : []), this.sent];
  }

  /** Whether every variant can be heard from where the player stands. */
  get ready(): boolean {
    return this.variants.every((variant) => variant.part || variant.whole);
  }

  /** Renders all variants and the programme. */
  open(): void {
    for (const variant of this.variants) this.render(variant, false);
    this.sent.request = this.engine.ask({ kind: 'sent', circuit: { layers: this.sent.layers } }, (answer) => {
      if (answer.kind === 'whole') this.takeWhole(this.sent, answer);
    });
    this.player.tell({ kind: 'select', name: this.voice(this.selected) });
  }

  select(heard: Heard): void {
    this.selected = heard;
    this.player.tell({ kind: 'select', name: this.voice(heard) });
    this.onChange();
  }

  setMatching(matching: Matching): void {
    this.matching = matching;
    this.level();
    this.onChange();
  }

  /** Puts a changed circuit on the bench: heard as soon as its part around the present place is rendered. */
  change(from: Heard, changes: PlainKeys): void {
    const old = this.bench;
    if (from.kind === 'variant') this.origin = from;
    const made = this.made('bench', BENCH_NAME, laidOver(from, changes), null);
    made.gainDecibels = from.gainDecibels;
    // one that was never heard is skipped; the one that is heard stays until the new one can be
    if (old && !old.part && !old.whole) this.engine.forget(old.request);
    else if (old) this.fallback = old;
    this.bench = made;
    this.render(made, true);
    this.selected = made;
    this.onChange();
  }

  /** Asks for the figures of what is on the bench, once its sound has come: ears first. */
  private askFigures(): void {
    const { bench } = this;
    if (!bench || bench.result || this.figuresOf === bench) return;
    this.figuresOf = bench;
    this.engine.ask({ kind: 'figures', name: BENCH_NAME, circuit: { layers: bench.layers } }, (answer) => {
      if (answer.kind === 'figures') bench.result = answer.variant;
      if (answer.kind === 'figures' && this.bench === bench) this.onChange();
    });
  }

  /** What was on the bench before has served. */
  private settled(): void {
    const { fallback } = this;
    this.fallback = null;
    if (fallback && fallback !== this.bench) this.discard(fallback);
  }

  /** A value that cannot be: what was on the bench before stands again. */
  private refused(texts: readonly string[]): void {
    this.bench = this.fallback;
    this.fallback = null;
    this.select(this.bench ?? this.variantOr(this.origin));
    this.onFault(texts);
  }

  /** Makes the bench a variant with a name. */
  keep(name: string): void {
    const { bench } = this;
    if (!bench?.result) return;
    const kept: Heard = { ...bench, kind: 'variant', name, result: { ...bench.result, name } };
    // what is still being rendered belongs to the kept one from now on
    if (!bench.whole) {
      this.render(kept, true);
      this.fallback = bench;
    }
    this.variants.push(kept);
    this.bench = null;
    this.select(kept);
    this.level();
  }

  /** Takes the bench away; what it came from is heard again. */
  clear(): void {
    const { bench } = this;
    if (!bench) return;
    this.bench = null;
    if (this.selected === bench) this.select(this.variantOr(this.origin));
    this.discard(bench);
    this.level();
    this.onChange();
  }

  private variantOr(heard: Heard | null): Heard {
    return heard && this.variants.includes(heard) ? heard : (this.variants[0] as Heard);
  }

  remove(variant: Heard): void {
    if (this.variants.length < 2) return;
    this.variants.splice(this.variants.indexOf(variant), 1);
    if (this.selected === variant) this.select(this.variants[0] as Heard);
    this.discard(variant);
    this.level();
    this.onChange();
  }

  private made(kind: Heard['kind'], name: string, layers: readonly PlainKeys[], result: VariantResult | null): Heard {
    return {
      kind,
      name,
      layers,
      result,
      request: 0,
      part: false,
      whole: false,
      peak: 0,
      loudnessLufs: null,
      gainDecibels: 0,
    };
  }

  /** Name of the sound that stands for it now. */
  private voice(heard: Heard): string {
    return heard.whole ? `${heard.request}` : `${heard.request} part`;
  }

  private discard(heard: Heard): void {
    this.engine.forget(heard.request);
    for (const name of [`${heard.request}`, `${heard.request} part`]) this.player.tell({ kind: 'drop', name });
  }

  private render(heard: Heard, urgent: boolean): void {
    // from the end the next play begins at the start
    const from = this.position < this.frames ? Math.round(this.position) : 0;
    heard.request = this.engine.ask(
      { kind: 'sound', circuit: { layers: heard.layers }, from },
      (answer) => {
        const name = `${heard.request} part`;
        if (answer.kind === 'fault') {
          if (heard === this.bench) this.refused(answer.texts);
          else this.onFault(answer.texts);
        } else if (answer.kind === 'whole') {
          this.takeWhole(heard, answer);
          this.settled();
          this.askFigures();
        } else if (answer.kind === 'part') {
          for (const sample of answer.samples) heard.peak = Math.max(heard.peak, Math.abs(sample));
          if (answer.first) {
            if (heard.kind === 'bench') this.level();
            const { from: start, length } = answer;
            this.player.tell({ kind: 'load', name, from: start, length, gain: amplitude(heard.gainDecibels) });
          }
          this.player.tell({ kind: 'fill', name, samples: answer.samples });
          if (answer.first) {
            heard.part = true;
            if (this.selected === heard) this.player.tell({ kind: 'select', name });
            this.settled();
            this.askFigures();
            this.onChange();
          }
        }
      },
      urgent,
    );
  }

  private takeWhole(
    heard: Heard,
    sound: { readonly samples: Float32Array; readonly peak: number; readonly loudnessLufs: number | null },
  ): void {
    heard.peak = sound.peak;
    heard.loudnessLufs = sound.loudnessLufs;
    heard.whole = true;
    const name = `${heard.request}`;
    const gain = amplitude(heard.gainDecibels);
    this.player.tell({ kind: 'load', name, from: 0, length: sound.samples.length, gain });
    this.player.tell({ kind: 'fill', name, samples: sound.samples });
    if (this.selected === heard) this.player.tell({ kind: 'select', name });
    this.player.tell({ kind: 'drop', name: `${heard.request} part` });
    this.level();
    this.onChange();
  }

  /** Finds every sound's gain anew and moves the levels there. */
  private level(): void {
    const sounds = [...this.variants, ...(this.bench ? [this.bench] : [])];
    const matched = this.matching === 'loudness' ? matchedGains(sounds) : sounds.map(() => setGain(sounds));
    sounds.forEach((heard, k) => {
      // a bench whose loudness is not known yet keeps the gain of what it came from
      if (this.matching === 'level' || heard.loudnessLufs !== null) heard.gainDecibels = matched[k] as number;
    });
    const loudest = Math.max(...sounds.map((heard) => (heard.loudnessLufs ?? -200) + heard.gainDecibels));
    const [own] = matchedGains([this.sent]);
    const wanted = loudest > -200 && this.sent.loudnessLufs !== null ? loudest - this.sent.loudnessLufs : 0;
    this.sent.gainDecibels = Math.min(wanted, own ?? 0);
    for (const heard of [...sounds, this.sent]) {
      const gain = amplitude(heard.gainDecibels);
      for (const name of [`${heard.request}`, `${heard.request} part`]) this.player.tell({ kind: 'level', name, gain });
    }
  }
}

/** The changes over those of a circuit; a key that was changed last is changed again in its place. */
function laidOver(from: Heard, changes: PlainKeys): readonly PlainKeys[] {
  const last = from.layers.at(-1);
  const again = from.kind === 'bench' && last && Object.keys(changes).every((key) => key in last);
  return again ? [...from.layers.slice(0, -1), { ...last, ...changes }] : [...from.layers, changes];
}

function amplitude(decibels: number): number {
  return 10 ** (decibels / 20);
}
