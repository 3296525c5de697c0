import type { Bench, Heard } from './bench.ts';
import { button, element, section } from './dom.ts';
import type { PlayerLink } from './player-link.ts';

/** Steps of the outline across. */
const OUTLINE_STEPS = 600;

/** The clip's outline as one SVG path: largest and smallest sample of each step. */
export function outlinePath(samples: Float64Array, steps: number = OUTLINE_STEPS): string {
  const peak = samples.reduce((most, value) => Math.max(most, Math.abs(value)), 1e-9);
  const upper: string[] = [];
  const lower: string[] = [];
  for (let k = 0; k < steps; k++) {
    const from = Math.floor((k * samples.length) / steps);
    const to = Math.max(from + 1, Math.floor(((k + 1) * samples.length) / steps));
    let [high, low] = [0, 0];
    for (let n = from; n < to; n++) {
      const value = (samples[n] ?? 0) / peak;
      if (value > high) high = value;
      if (value < low) low = value;
    }
    upper.push(`${k} ${(30 - 28 * high).toFixed(1)}`);
    lower.unshift(`${k} ${(30.4 - 28 * low).toFixed(1)}`);
  }
  return `M${upper.join('L')}L${lower.join('L')}Z`;
}

/** Play, place, loop, choice of the sound, level and volume. */
export class ListeningSection {
  readonly root: HTMLElement;
  private readonly bench: Bench;
  private readonly player: PlayerLink;
  private readonly rate: number;
  private readonly frames: number;
  private readonly playButton: HTMLButtonElement;
  private readonly place: HTMLInputElement;
  private readonly clock: HTMLElement;
  private readonly choices: HTMLElement;
  private readonly said: HTMLElement;
  private readonly loopBox: HTMLInputElement;
  private readonly matchBox: HTMLInputElement;
  private readonly loopText: HTMLElement;
  private readonly line: SVGElement;
  private loop: { from: number; to: number };
  private wantsPlay = false;
  private dragging = false;
  /** Whether a blind test has the sounds to itself. */
  private locked = false;

  constructor(bench: Bench, player: PlayerLink, programme: Float64Array, rate: number) {
    this.bench = bench;
    this.player = player;
    this.rate = rate;
    this.frames = programme.length;
    this.loop = { from: 0, to: this.frames };
    this.playButton = button('Play', () => this.toggle(), { id: 'play', class: 'main', disabled: '' });
    this.place = element('input', {
      type: 'range',
      id: 'place',
      min: '0',
      max: `${this.frames / rate}`,
      step: '0.05',
      value: '0',
      'aria-label': 'Place in the clip, seconds',
    });
    this.place.addEventListener('input', () => {
      this.dragging = true;
      this.show(Number(this.place.value) * rate);
    });
    this.place.addEventListener('change', () => {
      this.dragging = false;
      this.seek(Number(this.place.value) * rate);
    });
    this.clock = element('output', { class: 'figure', id: 'clock', for: 'place' });
    this.choices = element('div', { class: 'choices', role: 'group', 'aria-label': 'What is heard' });
    this.said = element('p', { class: 'note', role: 'status', id: 'heard-now' });
    this.loopBox = element('input', { type: 'checkbox', id: 'loop' });
    this.loopBox.addEventListener('change', () => this.tellLoop());
    this.loopText = element('span', { class: 'figure' });
    this.matchBox = element('input', { type: 'checkbox', id: 'match' });
    this.matchBox.addEventListener('change', () => bench.setMatching(this.matchBox.checked ? 'loudness' : 'level'));
    const outline = this.outline(programme);
    this.line = outline.querySelector('line') as SVGElement;
    this.root = section('listening', 'Listening', ...this.controls(outline));
    this.show(0);
    this.showLoop();
  }

  private outline(programme: Float64Array): HTMLElement {
    const holder = element('div', { class: 'outline', 'aria-hidden': 'true' });
    holder.innerHTML = `<svg viewBox="0 0 ${OUTLINE_STEPS} 60" preserveAspectRatio="none"><rect class="loop" x="0" y="0" width="0" height="60"/><path d="${outlinePath(programme)}"/><line x1="0" x2="0" y1="0" y2="60"/></svg>`;
    holder.addEventListener('click', (event) => {
      const box = holder.getBoundingClientRect();
      this.seek(((event.clientX - box.left) / box.width) * this.frames);
    });
    return holder;
  }

  private controls(outline: HTMLElement): HTMLElement[] {
    const volume = element('input', { type: 'range', id: 'volume', min: '-40', max: '0', step: '1', value: '-12' });
    const shown = element('output', { class: 'figure', for: 'volume' }, '−12 dB');
    this.player.setVolume(10 ** (-12 / 20));
    volume.addEventListener('input', () => {
      const decibels = Number(volume.value);
      shown.textContent = `${decibels < 0 ? '−' : ''}${Math.abs(decibels)} dB`;
      this.player.setVolume(decibels <= -40 ? 0 : 10 ** (decibels / 20));
    });
    return [
      element('div', { class: 'row' }, this.playButton, this.clock),
      element('div', { class: 'place' }, outline, this.place),
      element(
        'div',
        { class: 'row' },
        button('Loop starts here', () => this.mark('from'), { id: 'loop-from' }),
        button('Loop ends here', () => this.mark('to'), { id: 'loop-to' }),
        element('label', { class: 'check' }, this.loopBox, 'Loop'),
        this.loopText,
      ),
      this.choices,
      element(
        'div',
        { class: 'row' },
        element('label', { class: 'check' }, this.matchBox, 'Matched loudness'),
        element('label', { for: 'volume' }, 'Volume'),
        volume,
        shown,
      ),
      this.said,
      element(
        'p',
        { class: 'note' },
        'Begin with the volume low: full scale is loud, and hearing does not grow back. ‘As sent’ is the station’s programme with no receiver; it has no level of its own and is given the loudness of the loudest variant.',
      ),
    ];
  }

  /** Plays or pauses. */
  toggle(): void {
    if (this.playButton.disabled) return;
    this.wantsPlay = !this.wantsPlay;
    this.tellPlay();
  }

  play(): void {
    if (this.playButton.disabled || this.wantsPlay) return;
    this.toggle();
  }

  private tellPlay(): void {
    this.playButton.textContent = this.wantsPlay ? 'Pause' : 'Play';
    this.player.tell({ kind: this.wantsPlay ? 'play' : 'pause' });
    this.player.start().catch((fault: unknown) => {
      this.wantsPlay = false;
      this.playButton.textContent = 'Play';
      this.said.textContent = `This browser cannot play: ${fault instanceof Error ? fault.message : String(fault)}. Use the WAV files.`;
    });
  }

  seek(frame: number): void {
    const held = Math.max(0, Math.min(this.frames, frame));
    this.bench.position = held;
    this.player.tell({ kind: 'seek', position: held });
    this.show(held);
  }

  /** Moves by seconds. */
  nudge(seconds: number): void {
    this.seek(this.bench.position + seconds * this.rate);
  }

  mark(end: 'from' | 'to'): void {
    this.loop[end] = Math.round(this.bench.position);
    if (this.loop.to <= this.loop.from) {
      if (end === 'from') this.loop.to = this.frames;
      else this.loop.from = 0;
    }
    this.loopBox.checked = true;
    this.tellLoop();
  }

  toggleLoop(): void {
    this.loopBox.checked = !this.loopBox.checked;
    this.tellLoop();
  }

  toggleMatch(): void {
    if (this.locked) return;
    this.matchBox.checked = !this.matchBox.checked;
    this.bench.setMatching(this.matchBox.checked ? 'loudness' : 'level');
  }

  private tellLoop(): void {
    this.player.tell({ kind: 'loop', loop: this.loopBox.checked ? { ...this.loop } : null });
    this.showLoop();
  }

  private showLoop(): void {
    const { from, to } = this.loop;
    this.loopText.textContent = `${(from / this.rate).toFixed(1)} to ${(to / this.rate).toFixed(1)} s`;
    const box = this.root.querySelector('rect.loop');
    const scale = OUTLINE_STEPS / Math.max(this.frames, 1);
    box?.setAttribute('x', `${from * scale}`);
    box?.setAttribute('width', `${this.loopBox.checked ? (to - from) * scale : 0}`);
  }

  /** What the player says of itself. */
  take(state: { readonly position: number; readonly playing: boolean }): void {
    const position = Math.max(0, Math.min(this.frames, state.position));
    this.bench.position = position;
    if (this.wantsPlay && !state.playing && position >= this.frames) {
      this.wantsPlay = false;
      this.playButton.textContent = 'Play';
    }
    if (!this.dragging) this.show(position);
  }

  private show(frame: number): void {
    const seconds = frame / this.rate;
    if (!this.dragging) this.place.value = `${seconds}`;
    this.clock.textContent = `${seconds.toFixed(1)} of ${(this.frames / this.rate).toFixed(1)} s`;
    const x = `${(frame / Math.max(this.frames, 1)) * OUTLINE_STEPS}`;
    this.line.setAttribute('x1', x);
    this.line.setAttribute('x2', x);
  }

  /** While a blind test runs, nothing here chooses or tells a sound. */
  lock(locked: boolean): void {
    this.locked = locked;
    this.matchBox.disabled = locked;
    this.matchBox.checked = this.bench.matching === 'loudness';
    this.refresh();
  }

  /** Brings buttons and words up to date. */
  refresh(): void {
    this.playButton.disabled = !this.bench.ready;
    const sounds = this.bench.all;
    const buttons = sounds.map((heard) => this.choice(heard, sounds));
    const held = this.choices.contains(document.activeElement) ? document.activeElement?.id : undefined;
    this.choices.replaceChildren(...buttons);
    if (held) document.getElementById(held)?.focus();
    const { selected, matching } = this.bench;
    if (this.locked) {
      this.said.textContent = 'A blind test is running: what is heard is chosen below.';
      return;
    }
    const size = Math.abs(selected.gainDecibels).toFixed(1);
    const gain = size === '0.0' ? '0.0 dB' : `${selected.gainDecibels < 0 ? '−' : '+'}${size} dB`;
    const trueLevel = size === '0.0' ? 'true level' : `true level, the whole set by ${gain}`;
    const level = matching === 'loudness' || selected.kind === 'sent' ? `loudness matched by ${gain}` : trueLevel;
    this.said.textContent = `Heard: ${selected.name}, ${level}${selected.whole ? '' : '; rendering'}.`;
  }

  private choice(heard: Heard, sounds: readonly Heard[]): HTMLButtonElement {
    const index = sounds.indexOf(heard);
    const key = heard.kind === 'sent' ? '0' : heard.kind === 'bench' ? 'b' : index < 9 ? `${index + 1}` : '';
    const pressed = !this.locked && this.bench.selected === heard;
    const made = button('', () => this.bench.select(heard), {
      id: `hear-${heard.kind === 'variant' ? index + 1 : heard.kind}`,
      'aria-pressed': `${pressed}`,
      class: heard.kind === 'variant' ? 'variant' : heard.kind,
      ...(this.locked ? { disabled: '' } : {}),
      ...(key === '' ? {} : { 'aria-keyshortcuts': key }),
    });
    made.append(element('span', { class: 'key', 'aria-hidden': 'true' }, key), heard.name);
    return made;
  }

  /** Chooses by number, as the keys do. */
  choose(index: number): void {
    if (this.locked) return;
    const heard = this.bench.variants[index];
    if (heard) this.bench.select(heard);
  }

  chooseOther(kind: 'bench' | 'sent'): void {
    if (this.locked) return;
    const heard = kind === 'sent' ? this.bench.sent : this.bench.bench;
    if (heard) this.bench.select(heard);
  }
}
