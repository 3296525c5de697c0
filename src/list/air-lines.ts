import type { Written } from './fields.ts';

type Mapping = Readonly<Record<string, Written>>;

/** Sections of what is on the air that may stand on one line: the key that the line gives, and what takes them away. */
const LINES: Readonly<Record<string, { readonly key: string; readonly none: Mapping; readonly example: string }>> = {
  'second station': { key: 'clip', none: { level: 'none' }, example: 'second station: other.wav' },
  static: { key: 'level', none: { level: 'none' }, example: 'static: 2 mV' },
  'beat oscillator': { key: 'pitch', none: { level: 'none' }, example: 'beat oscillator: 800 Hz' },
  morse: { key: 'text', none: { 'keyed by': 'none' }, example: 'morse: CQ CQ' },
};

const SECTION = 'on the air.';

/** Dotted keys of those sections, each with how its line reads. */
export const AIR_LINES: ReadonlyMap<string, (written: Written) => Mapping> = new Map(
  Object.entries(LINES).map(([name, { key, none }]) => [
    SECTION + name,
    (written: Written): Mapping => (/^\s*none\s*$/i.test(String(written)) ? none : { [key]: written }),
  ]),
);

/** What to write in place of such a section with nothing in it. */
export function airLineExample(key: string): string {
  return LINES[key.slice(SECTION.length)]?.example ?? '';
}
