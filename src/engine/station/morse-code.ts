import { InputError } from '../errors.ts';

/**
 * International Morse code: Recommendation ITU-R M.1677-1 (10/2009), Annex 1, part I, clauses 1.1.1 letters, 1.1.2
 * figures, 1.1.3 punctuation marks and miscellaneous signs (title and clause names seen, table from memory).
 */
const SIGNS: Readonly<Record<string, string>> = {
  A: '.-',
  B: '-...',
  C: '-.-.',
  D: '-..',
  E: '.',
  É: '..-..',
  F: '..-.',
  G: '--.',
  H: '....',
  I: '..',
  J: '.---',
  K: '-.-',
  L: '.-..',
  M: '--',
  N: '-.',
  O: '---',
  P: '.--.',
  Q: '--.-',
  R: '.-.',
  S: '...',
  T: '-',
  U: '..-',
  V: '...-',
  W: '.--',
  X: '-..-',
  Y: '-.--',
  Z: '--..',
  '1': '.----',
  '2': '..---',
  '3': '...--',
  '4': '....-',
  '5': '.....',
  '6': '-....',
  '7': '--...',
  '8': '---..',
  '9': '----.',
  '0': '-----',
  '.': '.-.-.-',
  ',': '--..--',
  ':': '---...',
  '?': '..--..',
  "'": '.----.',
  '-': '-....-',
  '/': '-..-.',
  '(': '-.--.',
  ')': '-.--.-',
  '"': '.-..-.',
  '=': '-...-',
  '+': '.-.-.',
  '×': '-..-',
  '@': '.--.-.',
};

/** The same marks as keyboards and word processors have them. */
const ALSO: Readonly<Record<string, string>> = { '’': "'", '‘': "'", '“': '"', '”': '"', '–': '-', '−': '-' };

const EXPECTED = 'letters, figures, . , : ? \' - / ( ) " = + × @, or letters sent as one sign, such as <AR>';

/** A mark of the key: start and length in dots, counted from the start of the text. */
export interface KeyMark {
  readonly start: number;
  readonly length: number;
}

/** A text as its marks, in dots. */
export interface KeyedText {
  readonly marks: readonly KeyMark[];
  /** From the first mark to the end of the last one. */
  readonly dots: number;
}

/**
 * Spacing of clause 2 of the same part: a dash is three dots; one dot between the signals of a letter, three between
 * letters, seven between words. Letters in angle brackets run together as one sign: `<SK>` ends work.
 *
 * @param where  key or flag, for the fault
 * @throws InputError `no-morse-sign`, `no-morse-text`
 */
export function keyedText(text: string, where: string): KeyedText {
  const words = text.normalize('NFC').toUpperCase().trim().split(/\s+/).map(signsOfWord);
  const unknown = [...new Set(words.flat().filter((sign): sign is Unknown => typeof sign !== 'string'))];
  if (unknown.length > 0) {
    const got = [...new Set(unknown.map((sign) => JSON.stringify(sign.unknown)))].slice(0, 5).join(', ');
    throw new InputError({ code: 'no-morse-sign', where, got, expected: EXPECTED });
  }
  const marks: KeyMark[] = [];
  let at = 0;
  words.forEach((word, w) => {
    word.forEach((sign, s) => {
      // 1 of a gap stands already behind the mark before it
      if (marks.length > 0) at += (s === 0 && w > 0 ? 7 : 3) - 1;
      for (const signal of sign as string) {
        const length = signal === '-' ? 3 : 1;
        marks.push({ start: at, length });
        at += length + 1;
      }
    });
  });
  if (marks.length === 0) throw new InputError({ code: 'no-morse-text', where, got: 'nothing', expected: EXPECTED });
  return { marks, dots: at - 1 };
}

interface Unknown {
  readonly unknown: string;
}

/** Dots and dashes of each sign of a word. */
function signsOfWord(word: string): (string | Unknown)[] {
  return [...word.matchAll(/<([^<>]+)>|(.)/gu)].map(([, together, one]) => {
    if (together === undefined) return signOf(one as string);
    const signs = [...together].map(signOf);
    const unknown = signs.find((sign) => typeof sign !== 'string');
    return unknown ?? signs.join('');
  });
}

function signOf(letter: string): string | Unknown {
  const plain = ALSO[letter] ?? letter;
  return Object.hasOwn(SIGNS, plain) ? (SIGNS[plain] as string) : { unknown: letter };
}
