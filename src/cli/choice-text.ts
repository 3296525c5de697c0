import type { Figure } from '../engine/choosing/figures.ts';
import type { Goal } from '../engine/choosing/goals.ts';
import { formatQuantity } from '../engine/parts/format-quantity.ts';
import { figureName, figureValue, goalWords } from '../list/figure-words.ts';
import { COST_PARTS } from '../results/cost-parts.ts';
import { onePlainLine } from '../results/plain-line.ts';
import type { ChoiceAnswer } from './choice-answer.ts';
import type { PartScale } from './choice-input.ts';
import { type ChoiceRow, goalFigures } from './choice-rows.ts';
import { plainTable } from './plain-table.ts';

const signed = (value: number): string => `${value > 0 ? '+' : ''}${value.toFixed(1)} dB`;

/** The answer as a builder reads it: the values, what they give, what else moves, and which to take. */
export function choiceText(answer: ChoiceAnswer, goals: readonly Goal[], scales: readonly PartScale[]): string {
  const names = scales.map(({ part }) => part.name).join(', ');
  const lines = [`${onePlainLine(answer.variant)}: ${names} until ${goals.map(goalWords).join('; ')}`, ''];
  if (answer.rows.length > 0) lines.push(rowsTable(answer, goals, scales), '', remarks(scales));
  lines.push('', verdict(answer, goals, scales));
  if (answer.cautions.length > 0) lines.push('', ...answer.cautions.map((caution) => `Caution: ${caution}`));
  return lines.join('\n');
}

function rowsTable({ rows }: ChoiceAnswer, goals: readonly Goal[], scales: readonly PartScale[]): string {
  const figures = goalFigures(goals).filter((figure) => !isStanding(figure));
  const indices = figures.map((figure) => goalFigures(goals).findIndex((one) => same(one, figure)));
  const among = scales.find((scale) => scale.among)?.among ?? '';
  const listed = rows.find((row) => row.role === 'as listed')?.moved?.audioVoltsRmsAt30Percent ?? 0;
  const heads = [
    '',
    ...scales.map(({ part }) => part.name),
    ...figures.map((figure) => figureName(figure)),
    'audio',
    ...(listed > 0 ? ['re listed'] : []),
    '5 kHz',
    '-3 dB at',
    '2nd, 80 %',
    'plate',
    'loaded Q',
    '',
  ];
  const cells = (row: ChoiceRow): string[] => {
    const { moved } = row;
    const audio = moved?.audioVoltsRmsAt30Percent ?? 0;
    return [
      row.role === 'about' ? 'near by' : row.role,
      ...row.values.map((value, k) => partValue(scales[k], value, row.role === 'exact' || row.role === 'nearest')),
      ...figures.map((figure, k) => {
        const value = row.figures[indices[k] as number];
        return value == null ? '-' : figureValue(figure, value, 3);
      }),
      moved ? formatQuantity(audio, 'voltage', 3) : 'cannot be',
      ...(listed > 0 ? [audio > 0 ? signed(20 * Math.log10(audio / listed)) : '-'] : []),
      moved ? signed(moved.decibelsAt5000Hertz) : '-',
      moved?.highCornerHertz == null ? '-' : formatQuantity(moved.highCornerHertz, 'frequency', 3),
      moved?.secondPercent == null ? '-' : `${moved.secondPercent.toFixed(1)} %`,
      moved ? formatQuantity(moved.plateVolts, 'voltage', 3) : '-',
      moved ? moved.loadedQ.toFixed(0) : '-',
      row.best ? `best of ${among === 'drawer' ? 'the drawer' : among}` : '',
    ];
  };
  return plainTable(heads, rows.map(cells));
}

function remarks(scales: readonly PartScale[]): string {
  const searched = scales.map(
    ({ part, low, high }) =>
      `${part.name} ${formatQuantity(low, part.kind, 3)} to ${formatQuantity(high, part.kind, 3)}`,
  );
  return `audio: 400 Hz at 30 % modulation; 5 kHz: re 400 Hz. Searched: ${searched.join('; ')}.`;
}

/** What is met or not, in a sentence or two. */
function verdict(answer: ChoiceAnswer, goals: readonly Goal[], scales: readonly PartScale[]): string {
  const { exact, nearest, met } = answer;
  const said = (values: readonly number[]): string =>
    values.map((value, k) => `${scales[k]?.part.name} ${partValue(scales[k], value, true)}`).join(' and ');
  if (met) {
    const several = exact.length > 1 ? ` (the loudest of ${exact.length}: ${exact.map(said).join('; ')})` : '';
    const none =
      answer.best === null && scales.some(({ among }) => among) ? ' No value that can be had keeps the goal.' : '';
    return `Exact: ${said(exact[0] as readonly number[])}${several}.${none}`;
  }
  if (nearest === null) return 'NOT met: at no value in the range can the circuit come to rest.';
  const row = answer.rows.find((one) => one.values.every((value, k) => value === nearest[k]));
  const figures = goalFigures(goals);
  const had = figures.map((figure, k) => {
    const value = row?.figures[k];
    return `${figureName(figure)} ${value == null ? 'not reached' : figureValue(figure, value, 3)}`;
  });
  return [
    `NOT met. The best that can be had: ${had.join(', ')}, with ${said(nearest)}.`,
    obstacleText(answer, scales),
  ].join(' ');
}

function obstacleText({ inTheWay }: ChoiceAnswer, scales: readonly PartScale[]): string {
  if (!inTheWay) return '';
  const { costs, helps } = inTheWay;
  if (costs.length > 0) {
    const parts = costs.map(({ part, decibels }) => {
      const name = COST_PARTS.find(({ key }) => key === part)?.name ?? part;
      return `${name} (${decibels > 0 ? 'takes' : 'lifts'} ${Math.abs(decibels).toFixed(1)} dB at ${formatQuantity(costs[0]?.hertz ?? 0, 'frequency')})`;
    });
    return `In the way: ${parts.join(', ')}.`;
  }
  if (helps) {
    return `What would help most: ${helps.change} (${figureName(helps.figure)} ${figureValue(helps.figure, helps.value, 3)}).`;
  }
  const names = scales.map(({ part }) => part.name).join(' and ');
  return `No other part stands in the way: ${names} alone cannot do it.`;
}

/** A part's value: exact ones with four digits, those that can be had as they are marked. */
export function partValue(scale: PartScale | undefined, value: number, exactly: boolean): string {
  if (value === 0) return 'none';
  return formatQuantity(value, scale?.part.kind ?? 'number', exactly ? 4 : 3);
}

/** Figures that have a column anyway. */
function isStanding(figure: Figure): boolean {
  if (figure.kind === 'decibels') return figure.hertz === 5000;
  if (figure.kind === 'harmonic') return figure.which === 'second' && figure.hertz === 400 && figure.depth === 0.8;
  return figure.kind === 'high corner' || figure.kind === 'plate volts' || figure.kind === 'loaded Q';
}

function same(a: Figure, b: Figure): boolean {
  return JSON.stringify(a) === JSON.stringify(b);
}
