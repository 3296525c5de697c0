import type { Fault } from '../engine/errors.ts';

/** Longest piece of someone's input that a message repeats, characters. */
const LONGEST_REPEATED = 120;
/** Longest name of a place: paths may be long, and a path cut short helps nobody. */
const LONGEST_PLACE = 500;

/** One fault as a line: place, what was found, what would be right, and the remedy. Control characters are shown as `?`. */
export function faultText(fault: Fault): string {
  const { file, line, column, where, got, expected, hint } = fault;
  const place = line === undefined ? '' : `${file ?? 'parts list'}:${line}:${column ?? 1}: `;
  const remedy = hint === undefined || hint === '' ? '' : `. ${hint.charAt(0).toUpperCase()}${hint.slice(1)}`;
  const found = short(got, LONGEST_REPEATED).trim() || 'nothing';
  const sentence = `${place}${where === '' ? '' : `${short(where, LONGEST_PLACE)}: `}found ${found}; expected ${expected}${remedy}`;
  return `${harmless(sentence)}${/[.!?]$/.test(sentence) ? '' : '.'}`;
}

function short(text: string, longest: number): string {
  const letters = [...text];
  return letters.length > longest ? `${letters.slice(0, longest - 3).join('')}...` : text;
}

/** Without what could move a terminal's cursor or hide part of the line. */
function harmless(text: string): string {
  return text.replace(/[\p{Cc}\p{Zl}\p{Zp}\u202a-\u202e\u2066-\u2069]/gu, '?');
}
