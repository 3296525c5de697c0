/** What a stage can feed, as its terminals look from the coupling capacitor. */
export interface OutputPart {
  readonly name:
    | 'next grid'
    | 'ceramic earpiece'
    | 'crystal earpiece'
    | 'phones'
    | 'low-impedance earpiece'
    | 'nothing';
  /** Ohms; null: open, or phones alone. */
  readonly loadOhms: number | null;
  readonly loadFarads: number;
  readonly source: string;
}

export const OUTPUT_PARTS: readonly OutputPart[] = [
  {
    name: 'next grid',
    loadOhms: 1e6,
    loadFarads: 80e-12,
    source:
      'a 1 MΩ grid resistor and a triode of medium to high mu with its Miller capacitance: common practice, no source',
  },
  {
    name: 'ceramic earpiece',
    loadOhms: 20e6,
    loadFarads: 15e-9,
    source: 'Crystal earplug, http://wiki.waggy.org/dokuwiki/electronics/crystal_earplug, seen',
  },
  {
    name: 'crystal earpiece',
    loadOhms: 20e6,
    loadFarads: 500e-12,
    source: 'Loudspeaker for a crystal set, http://www.crystal-radio.eu/enkristalspeaker.htm, seen',
  },
  { name: 'phones', loadOhms: null, loadFarads: 0, source: 'those of 2000 ohm in stock phones' },
  { name: 'low-impedance earpiece', loadOhms: null, loadFarads: 0, source: '30 Ω and 0.5 mH: typical, from memory' },
  { name: 'nothing', loadOhms: null, loadFarads: 0, source: 'an open end' },
];

/** The part of that name; the list's own check lets no other name through. */
export function outputPart(name: OutputPart['name']): OutputPart {
  return OUTPUT_PARTS.find((part) => part.name === name) as OutputPart;
}
