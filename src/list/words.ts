/** Words of the trade that mean one of ours, letter by letter as a parts list may have them. */
const SYNONYMS: readonly (readonly [RegExp, string])[] = [
  [/\bvalve\b/gi, 'tube'],
  [/\banode\b/gi, 'plate'],
  [/\bcondenser\b/gi, 'capacitor'],
];

/** What a synonym may stand in for, for a list's JSON Schema: `tube` may be written `valve`. */
export const SYNONYM_OF: Readonly<Record<string, string>> = { tube: 'valve', plate: 'anode', capacitor: 'condenser' };

/** A key or choice in this program's words: synonyms replaced, typographic minus and runs of space made plain. */
export function plainWords(text: string): string {
  const spaced = text
    .normalize('NFC')
    .replace(/[\u2212\u2013]/g, '-')
    .replace(/[\s\u00a0]+/g, ' ')
    .trim();
  return SYNONYMS.reduce((words, [synonym, ours]) => words.replace(synonym, ours), spaced);
}

/** A name on one line: marks that move a cursor, turn the reading direction or show nothing become spaces. */
export function plainName(text: string): string {
  return text
    .normalize('NFC')
    .replace(/[\p{Cc}\p{Cf}\p{Cs}\p{Zl}\p{Zp}]/gu, ' ')
    .replace(/\s+/g, ' ')
    .trim();
}

/** One form for all spellings of a name that a reader, or a file system, takes for the same. */
export function foldedName(name: string): string {
  return name.normalize('NFKC').replace(/\s+/g, ' ').trim().toUpperCase().toLowerCase();
}
