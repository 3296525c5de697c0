/** One sound that can be heard: a stretch of the programme, or all of it. */
interface Voice {
  /** Programme frame that its first sample belongs to. */
  readonly from: number;
  readonly samples: Float32Array;
  /** How many of the samples are there. */
  filled: number;
  gain: number;
  goal: number;
  /** No longer wanted: goes as soon as nothing of it is heard. */
  dropped: boolean;
}

/** What is heard at one place of the programme, or was until just now. */
interface Head {
  /** Null: silence. */
  readonly name: string | null;
  position: number;
  weight: number;
  /** Weight when the present crossfade began. */
  start: number;
}

/** Seconds of the crossfade from one sound or place to another: no click, and too short to hear as a fade. */
const FADE_SECONDS = 0.012;
/** Seconds over which a level moves. */
const LEVEL_SECONDS = 0.02;

/** What the player tells the page. */
export interface MixerState {
  readonly position: number;
  readonly playing: boolean;
  /** True while it holds because the sound at this place is not rendered yet. */
  readonly waiting: boolean;
}

/**
 * Plays one of several sounds of the same programme, and changes between them at the same instant of it. Whatever
 * changes (sound, place, play, pause, the jump of a loop) is a crossfade of two heads, so that there is neither click
 * nor gap; weights always add up to one.
 */
export class Mixer {
  private readonly voices = new Map<string, Voice>();
  private readonly frames: number;
  private readonly fade: number;
  private readonly levelStep: number;
  private heads: Head[] = [];
  private age = 0;
  /** The sound that is wanted, and the one before it, which stands in while the wanted one is not rendered here. */
  private wanted: string | null = null;
  private before: string | null = null;
  private position = 0;
  private playing = false;
  private waiting = false;
  private moving = false;
  private loop: { readonly from: number; readonly to: number } | null = null;

  /** @param frames  length of the programme */
  constructor(sampleRateHertz: number, frames: number) {
    this.frames = frames;
    this.fade = Math.max(1, Math.round(FADE_SECONDS * sampleRateHertz));
    this.levelStep = 1 / (LEVEL_SECONDS * sampleRateHertz);
    this.heads = [{ name: null, position: 0, weight: 1, start: 1 }];
    this.age = this.fade;
  }

  get state(): MixerState {
    return { position: this.position, playing: this.playing, waiting: this.waiting };
  }

  /** Makes room for a sound of `length` frames from a place of the programme on. */
  load(name: string, from: number, length: number, gain: number): void {
    this.voices.set(name, { from, samples: new Float32Array(length), filled: 0, gain, goal: gain, dropped: false });
  }

  /** Adds samples to a sound; stretches come in order. */
  fill(name: string, samples: Float32Array): void {
    const voice = this.voices.get(name);
    if (!voice) return;
    voice.samples.set(samples.subarray(0, voice.samples.length - voice.filled), voice.filled);
    voice.filled = Math.min(voice.samples.length, voice.filled + samples.length);
  }

  drop(name: string): void {
    const voice = this.voices.get(name);
    if (voice) voice.dropped = true;
  }

  setLevel(name: string, gain: number): void {
    const voice = this.voices.get(name);
    if (!voice) return;
    voice.goal = gain;
    this.moving = true;
  }

  /** Changes over at the present place, as soon as the sound is there. */
  select(name: string | null): void {
    if (name === this.wanted) return;
    const heard = this.heads[this.heads.length - 1]?.name ?? null;
    this.before = this.playing ? heard : this.wanted;
    this.wanted = name;
  }

  play(): void {
    if (this.playing) return;
    if (this.position >= this.frames) this.position = this.loop ? this.loop.from : 0;
    this.playing = true;
    this.change(this.available(), this.position);
  }

  pause(): void {
    if (!this.playing) return;
    this.playing = false;
    this.waiting = false;
    this.change(null, this.position);
  }

  seek(position: number): void {
    this.position = Math.max(0, Math.min(this.frames, Math.round(position)));
    if (this.playing) this.change(this.available(), this.position);
  }

  /** Repeats between two places; null: plays to the end and stops. */
  setLoop(loop: { readonly from: number; readonly to: number } | null): void {
    this.loop = loop && loop.to - loop.from > 4 * this.fade ? loop : null;
  }

  /** Fills `output` with the next frames. */
  process(output: Float32Array, frames: number = output.length): void {
    for (let n = 0; n < frames; n++) output[n] = this.next();
    for (const [name, voice] of this.voices) {
      if (voice.dropped && !this.heads.some((head) => head.name === name)) this.voices.delete(name);
    }
  }

  private next(): number {
    this.moveLevels();
    if (this.playing) {
      const name = this.available();
      if (this.loop && this.position === this.loop.to - this.fade) {
        // the jump's crossfade ends as the loop does: the loop keeps its length
        this.position = this.loop.from - this.fade;
        this.change(this.available(), this.position);
      } else if (this.position >= this.frames) {
        this.pause();
      } else if (name !== this.heads[this.heads.length - 1]?.name) {
        this.change(name, this.position);
      }
      this.waiting = this.wanted !== null && name === null && this.playing;
    }
    return this.mixed();
  }

  private mixed(): number {
    if (this.age < this.fade) {
      this.age++;
      const share = 0.5 - 0.5 * Math.cos((Math.PI * this.age) / this.fade);
      const last = this.heads.length - 1;
      this.heads.forEach((head, k) => {
        head.weight = k === last ? head.start * (1 - share) + share : head.start * (1 - share);
      });
      if (this.age >= this.fade) this.heads = [this.heads[last] as Head];
    }
    let sum = 0;
    for (const head of this.heads) {
      if (head.weight > 0 && head.name !== null) sum += head.weight * this.sample(head.name, head.position);
      head.position++;
    }
    // where nothing is rendered yet the place is held
    if (this.playing && !this.waiting) this.position++;
    return sum;
  }

  /** Begins a crossfade from what is heard, whatever that is a mixture of, to one sound at one place. */
  private change(name: string | null, position: number): void {
    for (const head of this.heads) head.start = head.weight;
    this.heads.push({ name, position, weight: 0, start: 0 });
    this.age = 0;
  }

  /** The wanted sound if it is rendered at this place, else the one before, else none. */
  private available(): string | null {
    if (this.has(this.wanted)) return this.wanted;
    return this.has(this.before) ? this.before : null;
  }

  private has(name: string | null): boolean {
    if (name === null) return false;
    const voice = this.voices.get(name);
    if (!voice || (voice.dropped && name === this.wanted)) return false;
    // before the start, where a loop's crossfade may begin, and after the end there is silence to play
    if (this.position < 0 || this.position >= this.frames) return true;
    return this.position >= voice.from && this.position < voice.from + voice.filled;
  }

  private sample(name: string, position: number): number {
    const voice = this.voices.get(name);
    if (!voice) return 0;
    const at = position - voice.from;
    return at >= 0 && at < voice.filled ? (voice.samples[at] as number) * voice.gain : 0;
  }

  private moveLevels(): void {
    if (!this.moving) return;
    this.moving = false;
    for (const voice of this.voices.values()) {
      const apart = voice.goal - voice.gain;
      if (apart === 0) continue;
      const step = this.levelStep * Math.max(Math.abs(voice.goal), Math.abs(voice.gain), 1e-3);
      voice.gain = Math.abs(apart) <= step ? voice.goal : voice.gain + Math.sign(apart) * step;
      this.moving = true;
    }
  }
}
