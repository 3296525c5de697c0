import type { FigureGoal, Goal, LoudestGoal } from '../engine/choosing/goals.ts';
import { InputError } from '../engine/errors.ts';
import type { QuantityKind } from '../engine/parts/format-quantity.ts';
import { type QuantityRange, readQuantity } from '../engine/parts/quantities.ts';
import { FIGURES, type FigureWords } from './figure-words.ts';
import { plainWords } from './words.ts';

/** Forms of a goal, as a fault lists them. */
export const GOAL_FORMS = [
  '-6 dB at 5 kHz',
  'corner 3.5 kHz',
  'low corner 80 Hz',
  'second harmonic 3 % at 400 Hz, 80 % modulation',
  'carrier on plate 100 mV',
  'plate 45 V',
  'loaded Q 40',
  'loudest with corner above 3 kHz',
] as const;

/** Most goals at once. */
export const MOST_GOALS = 2;

const FORMS = GOAL_FORMS.join('; ');
const ABOVE = ['above', 'over', 'at least'];
const BELOW = ['below', 'under', 'at most'];
const SIDES = [...ABOVE, ...BELOW];
/** Signal at which harmonics are judged where the goal names none. */
const TONE_HERTZ = 400;
const TONE_DEPTH = 0.8;
const TONE_FORM = 'second harmonic 3 % at 400 Hz, 80 % modulation';

const HARMONIC = /^(second|2nd|third|3rd|total)(?: harmonics?(?: distortion)?| distortion)?\b/i;
const FREQUENCY = { atLeast: 20, atMost: 16e3 } as const;
const DECIBELS = { atLeast: -60, atMost: 40 } as const;

/**
 * Reads one goal, or two with a semicolon between them.
 *
 * @param where  flag, for the faults
 * @throws InputError `no-goal`, `many-goals`, `bad-goal`: what was understood, what was not, what is accepted
 */
export function readGoals(written: string, where: string): Goal[] {
  const texts = written.split(';').map((text) => plainWords(text));
  const kept = texts.filter((text) => text !== '');
  const wrong = (code: string, got: string, expected: string): InputError =>
    new InputError({ code, where, got, expected });
  if (kept.length === 0) throw wrong('no-goal', 'no goal', `a goal such as ${FORMS}`);
  if (kept.length > MOST_GOALS) throw wrong('many-goals', `${kept.length} goals`, `at most ${MOST_GOALS}`);
  return kept.map((text) => new GoalReader(text, where).goal());
}

/** Reads a goal from left to right, so that a fault can tell how far it was understood. */
class GoalReader {
  private readonly text: string;
  private readonly where: string;
  private at = 0;

  constructor(text: string, where: string) {
    this.text = text;
    this.where = where;
  }

  goal(): Goal {
    if (!this.take(/^loudest\b/i)) return this.figureGoal();
    if (this.rest() === '') return { kind: 'loudest', limit: null };
    if (!this.take(/^(?:with|while)\b/i)) throw this.wrong('with and a limit, such as loudest with corner above 3 kHz');
    return { kind: 'loudest', limit: this.limit() };
  }

  private figureGoal(): FigureGoal {
    const words = this.words();
    if (words === null) {
      const decibels = this.decibels();
      if (decibels) return { kind: 'figure', ...decibels };
      throw this.wrong(`a goal such as ${FORMS}`);
    }
    if (this.side()) {
      this.at = 0;
      throw this.wrong(`an exact goal such as ${words.example}`, `for a limit: loudest with ${this.text}`);
    }
    return { kind: 'figure', ...this.target(words) };
  }

  private limit(): NonNullable<LoudestGoal['limit']> {
    const words = this.words();
    const side = this.side();
    if (words === null && side === null) {
      throw this.wrong('a limit such as corner above 3 kHz, second harmonic below 5 %, at least -6 dB at 5 kHz');
    }
    if (side === null) throw this.wrong(`one of ${SIDES.join(', ')}`);
    const which = ABOVE.includes(side) ? 'above' : 'below';
    if (words) return { ...this.target(words), side: which };
    const decibels = this.decibels();
    if (decibels) return { ...decibels, side: which };
    throw this.wrong('decibels at a frequency, such as at least -6 dB at 5 kHz');
  }

  /** The words that name a figure, or null where there are none. */
  private words(): FigureWords | null {
    for (const words of FIGURES) if (this.take(words.words)) return words;
    const harmonic = this.take(HARMONIC);
    if (!harmonic) return null;
    const word = harmonic.toLowerCase();
    const which = word.startsWith('total') ? 'total' : /^(?:third|3)/.test(word) ? 'third' : 'second';
    return {
      words: HARMONIC,
      figure: { kind: 'harmonic', which, hertz: TONE_HERTZ, depth: TONE_DEPTH },
      kind: 'fraction',
      range: { above: 0, atMost: 1 },
      example: TONE_FORM,
    };
  }

  private side(): string | null {
    const found = this.take(new RegExp(`^(?:${SIDES.join('|')})\\b`, 'i'));
    return found?.toLowerCase() ?? null;
  }

  /** The value after a figure's words, with the signal of a harmonic. */
  private target({ figure, kind, range, example }: FigureWords): Omit<FigureGoal, 'kind'> {
    this.take(/^(?:of|is|=|at)(?=[\s\d])/i);
    if (figure.kind !== 'harmonic') return { figure, target: this.value(/^.+/, kind, range, example) };
    const target = 100 * this.percent(/^.*?(?=\s+at\b|,|$)/i, range, example);
    let { hertz, depth } = figure;
    for (let part = 0; this.rest() !== '' && part < 2; part++) {
      this.take(/^(?:,|and\b)/i);
      if (this.take(/^at\b/i)) hertz = this.value(/^.*?(?=,|$)/, 'frequency', FREQUENCY, example);
      else {
        depth = this.percent(/^.*?(?=\s*modulation\b|$)/i, { above: 0, atMost: 1 }, example);
        if (!this.take(/^modulation\b/i)) throw this.wrong(`modulation, as in ${example}`);
      }
    }
    if (this.rest() !== '') throw this.wrong(`the end of the goal, as in ${example}`);
    return { figure: { ...figure, hertz, depth }, target };
  }

  /** `-6 dB at 5 kHz`, or null where no decibels stand. */
  private decibels(): Omit<FigureGoal, 'kind'> | null {
    const found = /^([-+]?\s*[\d.]+)\s*dB\b/i.exec(this.rest());
    if (!found) return null;
    const example = '-6 dB at 5 kHz';
    const target = Number((found[1] as string).replace(/\s+/g, ''));
    if (!(target >= DECIBELS.atLeast && target <= DECIBELS.atMost)) {
      throw this.wrong(`${DECIBELS.atLeast} to +${DECIBELS.atMost} dB, as in ${example}`);
    }
    this.skip(found[0].length);
    if (!this.take(/^(?:at|for)\b/i)) throw this.wrong(`at and a frequency, as in ${example}`);
    const start = this.at;
    const hertz = this.value(/^.+/, 'frequency', { ...FREQUENCY, atMost: 20e3 }, example);
    if (hertz === 400) {
      this.at = start;
      throw this.wrong('another frequency: decibels are counted from the level at 400 Hz');
    }
    return { figure: { kind: 'decibels', hertz }, target };
  }

  /** A share that is written in percent, with or without its sign. */
  private percent(pattern: RegExp, range: QuantityRange, example: string): number {
    const text = pattern.exec(this.rest())?.[0]?.trim() ?? '';
    return this.value(pattern, 'fraction', range, example, /^[\d.]+$/.test(text) ? `${text} %` : text);
  }

  private value(pattern: RegExp, kind: QuantityKind, range: QuantityRange, example: string, as?: string): number {
    const text = pattern.exec(this.rest())?.[0] ?? '';
    const reading = readQuantity(as ?? text.trim(), kind, this.where, range);
    if ('fault' in reading) {
      throw this.wrong(`${reading.fault.expected}, as in ${example}`, reading.fault.hint);
    }
    this.skip(text.length);
    return reading.value;
  }

  private rest(): string {
    return this.text.slice(this.at);
  }

  private take(pattern: RegExp): string | null {
    const found = pattern.exec(this.rest())?.[0];
    if (found === undefined) return null;
    this.skip(found.length);
    return found;
  }

  private skip(length: number): void {
    this.at += length;
    this.at += /^\s*/.exec(this.rest())?.[0].length ?? 0;
  }

  private wrong(expected: string, hint?: string): InputError {
    const understood = this.text.slice(0, this.at).trim();
    const rest = this.rest() === '' ? 'nothing' : JSON.stringify(this.rest());
    return new InputError({
      code: 'bad-goal',
      where: this.where,
      got: understood === '' ? rest : `${rest} after ${JSON.stringify(understood)}, which is understood`,
      expected,
      ...(hint === undefined ? {} : { hint }),
    });
  }
}
