import { PEAK_DECIBELS } from '../../engine/measure/matched-levels.ts';
import type { VariantResult } from '../../results/result.ts';
import { samplesOfBytes } from '../clip-coding.ts';
import { cautionsOf, inWords } from '../in-words.ts';
import { type PageData, resultOf, type Side } from '../page-data.ts';
import { pageText } from '../page-text.ts';
import { partsListText } from '../parts-list-text.ts';
import { Bench } from './bench.ts';
import { BlindSection } from './blind-section.ts';
import { element, section } from './dom.ts';
import { DrawingSection } from './drawing-section.ts';
import { EngineLink } from './engine-link.ts';
import { ListeningSection } from './listening-section.ts';
import { PlayerLink } from './player-link.ts';
import { ResponseSection } from './response-section.ts';
import { WorkingPointSection } from './working-point-section.ts';
import { WriteUpSection } from './write-up-section.ts';

const textOf = (id: string): string => document.getElementById(id)?.textContent ?? '';

function bytesOf(base64: string): Uint8Array<ArrayBuffer> {
  const text = atob(base64);
  const bytes = new Uint8Array(text.length);
  for (let n = 0; n < text.length; n++) bytes[n] = text.charCodeAt(n);
  return bytes;
}

/** The clip's sides, as samples. */
function clipSides(data: PageData): Partial<Record<Side, Float64Array>> {
  const sides: Partial<Record<Side, Float64Array>> = {};
  for (const side of ['both', 'left', 'right'] as const) {
    const coded = data.clip.sides[side];
    if (coded) sides[side] = samplesOfBytes(bytesOf(coded.base64), coded.coding);
  }
  return sides;
}

async function unpacked(base64: string): Promise<string> {
  const packed = new Blob([bytesOf(base64)]).stream();
  return new Response(packed.pipeThrough(new DecompressionStream('gzip'))).text();
}

async function open(): Promise<void> {
  const data = JSON.parse(textOf('page-data')) as PageData;
  new Page(data, await unpacked(textOf('page-worker')));
}

/** The page: its parts, and how a change in one reaches the others. */
class Page {
  private readonly data: PageData;
  private readonly engine: EngineLink;
  private readonly bench: Bench;
  private readonly listening: ListeningSection;
  private readonly drawing: DrawingSection;
  private readonly response: ResponseSection;
  private readonly working: WorkingPointSection;
  private readonly blind: BlindSection;
  private readonly writeUp: WriteUpSection;
  private readonly words = element('div', { id: 'in-words' });
  private readonly cautions = element('ul', { class: 'cautions' });
  private shown: readonly VariantResult[] = [];
  private benchShown: VariantResult | null = null;
  private readonly shortcuts = element('input', { type: 'checkbox', id: 'shortcuts', checked: '' });

  constructor(data: PageData, engineText: string) {
    this.data = data;
    const sides = clipSides(data);
    const { sampleRateHertz, frames } = data.clip;
    this.engine = new EngineLink(engineText, {
      kind: 'open',
      base: data.base,
      curves: data.curves,
      sampleRateHertz,
      sides,
      quality: data.quality,
      fullScaleVolts: data.fullScaleVolts,
    });
    const player = new PlayerLink(textOf('page-player'), sampleRateHertz, frames, (state) =>
      this.listening.take(state),
    );
    this.bench = new Bench(
      data,
      this.engine,
      player,
      () => this.refresh(),
      (texts) => this.drawing.showFault(texts),
    );
    const programme = Object.values(sides)[0] ?? new Float64Array(0);
    this.listening = new ListeningSection(this.bench, player, programme, sampleRateHertz);
    this.drawing = new DrawingSection(this.bench);
    this.response = new ResponseSection(data.measured, () => this.refresh());
    this.working = new WorkingPointSection();
    this.blind = new BlindSection(this.bench, this.listening);
    this.writeUp = new WriteUpSection(this.bench, data.notes, data.name, {
      result: () => resultOf(this.kept()),
      pageText: () => this.savedText(),
      partsList: () =>
        partsListText(
          data.name,
          data.base,
          this.bench.variants.map(({ name, layers }) => ({ name, layers })),
        ),
      wav: (variant, onBytes) => {
        const seed = this.bench.variants.indexOf(variant) + 1;
        this.engine.ask(
          {
            kind: 'wav',
            name: variant.name,
            circuit: { layers: variant.layers },
            gainDecibels: this.wavGain(variant),
            seed,
          },
          (answer) => {
            if (answer.kind === 'wav') onBytes(answer.bytes);
            if (answer.kind === 'fault') this.drawing.showFault(answer.texts);
          },
        );
      },
    });
    this.mount();
    this.refresh();
    this.bench.open();
  }

  private mount(): void {
    const { name, clip } = this.data;
    const keys = element(
      'details',
      { class: 'screen' },
      element('summary', {}, 'Keys'),
      element(
        'p',
        {},
        'Space: play and pause. 1 to 9: variants; B: the bench; 0: as sent. Left and right arrow: two seconds back and on. [ and ]: loop starts, loop ends; L: loop. M: matched loudness.',
      ),
      element('label', { class: 'check' }, this.shortcuts, 'Use these single keys'),
    );
    const head = element(
      'header',
      {},
      element('h1', {}, name === '' ? 'Listening page' : name),
      this.words,
      element(
        'p',
        { class: 'note' },
        `Clip: ${clip.file}, ${(clip.frames / clip.sampleRateHertz).toFixed(1)} s at ${clip.sampleRateHertz} Hz.`,
      ),
    );
    const main = document.getElementById('page');
    main?.replaceChildren(
      head,
      this.listening.root,
      keys,
      this.drawing.root,
      this.response.root,
      this.working.root,
      this.blind.root,
      this.writeUp.root,
      section('cautions', 'Cautions', this.cautions),
    );
    document.addEventListener('keydown', (event) => this.press(event));
  }

  /** Brings everything up to date. */
  private refresh(): void {
    this.listening.refresh();
    // the drawing and the curves follow what is heard, and would tell what a trial hides
    if (this.blind.isRunning) return;
    const variants = this.bench.variants.flatMap(({ result }) => (result ? [result] : []));
    // until the new figures have come the old ones stay
    const bench = this.bench.bench ? (this.bench.bench.result ?? this.benchShown) : null;
    this.benchShown = bench;
    const shown = bench ? [...variants, bench] : variants;
    const changed = shown.length !== this.shown.length || shown.some((variant, k) => variant !== this.shown[k]);
    if (changed) {
      this.shown = shown;
      this.words.replaceChildren(...inWords(shown).map((sentence) => element('p', { class: 'lead' }, sentence)));
      this.cautions.replaceChildren(...cautionsOf(shown).map((caution) => element('li', {}, caution)));
    }
    this.drawing.refresh(this.response.markedHertz);
    const onBench = this.bench.selected.kind === 'bench' && bench !== null;
    const selected = onBench ? shown.length - 1 : this.drawing.shown ? shown.indexOf(this.drawing.shown) : 0;
    this.response.refresh(this.shown, Math.max(0, selected));
    this.working.refresh(this.shown);
    this.blind.refresh();
    this.writeUp.refresh();
    if (this.bench.ready) document.documentElement.dataset.ready = 'yes';
  }

  private press(event: KeyboardEvent): void {
    const { key, ctrlKey, metaKey, altKey, target } = event;
    if (ctrlKey || metaKey || altKey || !this.shortcuts.checked) return;
    const at = target instanceof Element ? target : null;
    // a field takes its own keys, and so does whatever is pressed or stepped by them
    if (at?.closest('input:not([type=checkbox]), textarea, select, [role=spinbutton], [role=region]')) return;
    if (key === ' ' && at?.closest('button, a, summary, input')) return;
    const acts: Readonly<Record<string, () => void>> = {
      ' ': () => this.listening.toggle(),
      ArrowLeft: () => this.listening.nudge(-2),
      ArrowRight: () => this.listening.nudge(2),
      '[': () => this.listening.mark('from'),
      ']': () => this.listening.mark('to'),
      l: () => this.listening.toggleLoop(),
      m: () => this.listening.toggleMatch(),
      b: () => this.listening.chooseOther('bench'),
      '0': () => this.listening.chooseOther('sent'),
    };
    const act = /^[1-9]$/.test(key)
      ? () => this.listening.choose(Number(key) - 1)
      : (acts[key.toLowerCase()] ?? acts[key]);
    if (!act) return;
    event.preventDefault();
    act();
  }

  /** The gain of a variant's WAV file: the command's own, or for a kept one what keeps it from clipping. */
  private wavGain(variant: { readonly result: VariantResult | null; readonly peak: number }): number {
    const own = variant.result?.sound?.gainDecibels;
    return own ?? Math.min(0, PEAK_DECIBELS - 20 * Math.log10(Math.max(variant.peak, 1e-9)));
  }

  /** The data with what has been kept and written since. */
  private kept(): PageData {
    return {
      ...this.data,
      variants: this.bench.variants.flatMap(({ layers, result }) => (result ? [{ layers, result }] : [])),
      measured: this.response.measured,
      notes: this.writeUp.notes.value,
    };
  }

  private savedText(): string {
    const policy = document.querySelector('meta[http-equiv="Content-Security-Policy"]')?.getAttribute('content') ?? '';
    const parts = {
      policy,
      client: textOf('page-client'),
      worker: textOf('page-worker'),
      player: textOf('page-player'),
      style: document.querySelector('style')?.textContent ?? '',
    };
    return pageText(parts, this.kept());
  }
}

open().catch((fault: unknown) => {
  const text = `This page cannot open in this browser: ${fault instanceof Error ? fault.message : String(fault)}.`;
  document.getElementById('page')?.replaceChildren(element('p', { role: 'alert' }, text));
});
