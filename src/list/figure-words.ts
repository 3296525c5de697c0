import type { Figure } from '../engine/choosing/figures.ts';
import type { Goal } from '../engine/choosing/goals.ts';
import { formatQuantity, type QuantityKind } from '../engine/parts/format-quantity.ts';
import type { QuantityRange } from '../engine/parts/quantities.ts';

/** How one kind of figure is written: its words, what follows them and an example. */
export interface FigureWords {
  readonly words: RegExp;
  readonly figure: Figure;
  readonly kind: QuantityKind;
  readonly range: QuantityRange;
  readonly example: string;
}

/** Every figure but decibels and harmonics, which are written in another order. */
export const FIGURES: readonly FigureWords[] = [
  {
    words: /^(?:low|lower|bass) corner\b/i,
    figure: { kind: 'low corner' },
    kind: 'frequency',
    range: { atLeast: 1, atMost: 399 },
    example: 'low corner 80 Hz',
  },
  {
    words: /^(?:(?:high|upper|treble) )?corner\b/i,
    figure: { kind: 'high corner' },
    kind: 'frequency',
    range: { atLeast: 401, atMost: 16e3 },
    example: 'corner 3.5 kHz',
  },
  {
    words: /^carrier (?:on|at) (?:the )?plate\b/i,
    figure: { kind: 'carrier on plate' },
    kind: 'voltage',
    range: { above: 0, atMost: 1000 },
    example: 'carrier on plate 100 mV',
  },
  {
    words: /^plate(?: volts| voltage)?\b/i,
    figure: { kind: 'plate volts' },
    kind: 'voltage',
    range: { above: 0, atMost: 1000 },
    example: 'plate 45 V',
  },
  {
    words: /^loaded Q\b/i,
    figure: { kind: 'loaded Q' },
    kind: 'number',
    range: { above: 0, atMost: 2000 },
    example: 'loaded Q 40',
  },
];

/** A goal in the words it can be read from. */
export function goalWords(goal: Goal): string {
  if (goal.kind === 'figure') return figureWords(goal.figure, goal.target, '');
  const { limit } = goal;
  return limit === null ? 'loudest' : `loudest with ${figureWords(limit.figure, limit.target, `${limit.side} `)}`;
}

/** What a figure is called in tables. */
export function figureName(figure: Figure): string {
  switch (figure.kind) {
    case 'decibels':
      return formatQuantity(figure.hertz, 'frequency');
    case 'high corner':
      return 'corner';
    case 'low corner':
      return 'low corner';
    case 'harmonic':
      return figure.which === 'total' ? 'total distortion' : `${figure.which} harmonic`;
    case 'carrier on plate':
      return 'carrier on plate';
    case 'plate volts':
      return 'plate';
    case 'loaded Q':
      return 'loaded Q';
  }
}

/** A figure's value with its unit. */
export function figureValue(figure: Figure, value: number, digits = 4): string {
  switch (figure.kind) {
    case 'decibels':
      return `${Number(value.toPrecision(digits))} dB`;
    case 'high corner':
    case 'low corner':
      return formatQuantity(value, 'frequency', digits);
    case 'harmonic':
      return formatQuantity(value / 100, 'fraction', digits);
    case 'carrier on plate':
    case 'plate volts':
      return formatQuantity(value, 'voltage', digits);
    case 'loaded Q':
      return formatQuantity(value, 'number', digits);
  }
}

function figureWords(figure: Figure, target: number, side: string): string {
  const value = figureValue(figure, target, 6);
  if (figure.kind === 'decibels') return `${side}${value} at ${figureName(figure)}`;
  if (figure.kind !== 'harmonic') return `${figureName(figure)} ${side}${value}`;
  const signal = `${formatQuantity(figure.hertz, 'frequency')}, ${formatQuantity(figure.depth, 'fraction')} modulation`;
  return `${figureName(figure)} ${side}${value} at ${signal}`;
}
