import fc from 'fast-check';
import { expect } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { starterList } from '../../src/list/starter.ts';
import { listVariants, MOST_VARIANTS, type Setting } from '../../src/list/variants.ts';
import { faultText } from '../../src/results/fault-text.ts';

/** Lists in order, from which the spoilt ones are made: the starter, and one that uses what the starter does not. */
export const BASES = [
  starterList(),
  `name: &n Workbench
station: { carrier: 1 MHz, level: 1.4 V, modulation: 90 %, pre-emphasis: nrsc-1, channel limit: 9 kHz, side: left }
tuned circuit: { capacitor: 150 pF, unloaded Q: 60, tap: 0.5, retune: no, detune: 2 kHz }
detector: { valve: My own, grid condenser: 100p, grid condenser leakage: 50M, leak: none, law: square }
anode:
  supply: 135 V
  load: { kind: resistor, resistance: 47k }
output: { load resistance: 470k, load capacitance: 100p }
strays: { grid: 2p, plate: 3p, grid to plate: 1p }
tube:
  rows:
    - { plate: 90 V, grid: -4.5 V, current: 2.5 mA, mu: 9.3, slope: 850 µmho }
    - { plate: 135 V, grid: -9 V, current: 3 mA, mu: 9.3, plate resistance: 10300 }
  capacitances: { grid to plate: 6p, grid to cathode: 3p, plate to cathode: 2.1p }
  filament: 2 V
  cathode kind: filament oxide
  grid current:
    readings:
      - { grid: -0.3 V, leak: 1M }
      - { grid: -0.5 V, leak: 5M, leak returns to: 0 V }
variants:
  a: &a { plate.load: 100k }
  b: { plate: { load: { resistance: 22k } }, tuned circuit.loaded Q: 30 }
  c: *a
`,
  'tuned circuit: { loaded Q: 40 }\nplate:\n  load: transformer 1:3\nvariants: { x: , y: { plate.load: choke 100 H } }\n',
];

/** What gets into a list by slips, by other programs and by ill will. */
export const PIECES = [
  ...['', ' ', '\n', '\n  ', '\t', '\r', '\0', '\ufeff', '\u2028', '\ud800', '\u001b[2J', 'é', 'Ω', 'µ', '日'],
  ...[
    ':',
    ': ',
    '- ',
    '? ',
    '[',
    ']',
    '{',
    '}',
    ',',
    '#',
    '|\n',
    '>\n',
    '"',
    "'",
    '&a ',
    '*a',
    '*n',
    '!!int ',
    '<<: *a',
  ],
  ...['---\n', '...\n', '%YAML 1.1\n---\n', 'null', '~', 'true', 'no', '.inf', '.nan', '0x1F', '0o7', '1_0', '1:30'],
  ...[
    '0',
    '-0',
    '-1',
    '1e400',
    '1e-400',
    '9'.repeat(400),
    '2M2',
    '1,5',
    '1,500',
    '60 MV',
    '5 mF',
    'none',
    '80 %',
    '1:3',
  ],
  ...['__proto__', 'constructor', 'toString', 'variants', 'plate', 'tube', 'rows', 'plate.bypass', 'plate.load.kind'],
  ...[
    'resistor',
    'choke',
    'transformer',
    'phones',
    'filament +',
    '6SL7-GT',
    '01-A',
    'x'.repeat(2000),
    '{a: '.repeat(40),
  ],
];

const KEYS = [
  'plate.bypass',
  'plate.load',
  'anode.supply',
  'detector.valve',
  'tuned circuit.loaded Q',
  'tube.rows',
  'nil',
];

type Slip =
  | { readonly kind: 'insert' | 'replace'; readonly at: number; readonly piece: string }
  | { readonly kind: 'remove' | 'repeat'; readonly at: number; readonly count: number }
  | { readonly kind: 'indent'; readonly at: number; readonly count: number };

const at = fc.nat(1_000_000);
const slip: fc.Arbitrary<Slip> = fc.oneof(
  fc.record({
    kind: fc.constantFrom('insert' as const, 'replace' as const),
    at,
    piece: fc.oneof({ weight: 4, arbitrary: fc.constantFrom(...PIECES) }, fc.string({ unit: 'binary', maxLength: 6 })),
  }),
  fc.record({ kind: fc.constantFrom('remove' as const, 'repeat' as const), at, count: fc.nat(30) }),
  fc.record({ kind: fc.constant('indent' as const), at, count: fc.nat(6) }),
);

function spoilt(base: string, slips: readonly Slip[]): string {
  let text = base;
  for (const s of slips) {
    const place = s.at % (text.length + 1);
    if ('piece' in s) {
      // a word at the place, so that values and keys are swapped whole; or nothing of it
      const start = s.kind === 'insert' ? place : text.slice(0, place).search(/[^\s:,{}]*$/);
      const end = s.kind === 'insert' ? place : place + text.slice(place).search(/[\s:,{}]|$/);
      text = text.slice(0, start) + s.piece + text.slice(end);
    } else if (s.kind === 'remove') text = text.slice(0, place) + text.slice(place + s.count);
    else if (s.kind === 'repeat') text = text.slice(0, place + s.count) + text.slice(place);
    else {
      const lines = text.split('\n');
      const line = s.at % lines.length;
      lines[line] = ' '.repeat(s.count) + (lines[line] as string).trimStart();
      text = lines.join('\n');
    }
  }
  return text;
}

const setting: fc.Arbitrary<Setting> = fc.record({
  key: fc.constantFrom(...KEYS),
  value: fc.oneof(fc.constantFrom(...PIECES, '1n,2n', '47k,choke 10 H', ',,'), fc.string({ maxLength: 8 })),
  where: fc.constant('--set'),
});

function everyNumberFinite(value: unknown): boolean {
  if (typeof value === 'number') return Number.isFinite(value);
  return typeof value !== 'object' || value === null || Object.values(value).every(everyNumberFinite);
}

/** Reads a list; whatever happens must be variants fit to run, or faults fit to print. */
export function judge(text: string, settings: readonly Setting[]): 'read' | 'refused' {
  try {
    const variants = listVariants(text, 'set.yaml', settings);
    expect(variants.length).toBeGreaterThanOrEqual(1);
    expect(variants.length).toBeLessThanOrEqual(MOST_VARIANTS);
    const names = variants.map((variant) => variant.name.toLowerCase());
    expect(new Set(names).size).toBe(names.length);
    for (const { name, circuit, changes } of variants) {
      expect(name).toMatch(/^[^\p{Cc}\p{Cs}]+$/u);
      expect(everyNumberFinite(circuit)).toBe(true);
      expect(Object.values(changes).every((value) => typeof value === 'string')).toBe(true);
    }
    return 'read';
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    expect(error.faults.length).toBeGreaterThanOrEqual(1);
    expect(error.faults.length).toBeLessThanOrEqual(50);
    for (const fault of error.faults) {
      expect(faultText(fault)).toMatch(/^[^\p{Cc}]+: found [^\p{Cc}]+; expected [^\p{Cc}]+[.!?]$/u);
      expect((fault.line ?? 1) >= 1 && (fault.column ?? 1) >= 1).toBe(true);
    }
    return 'refused';
  }
}

/** Reads many spoilt lists; how many were read and refused. */
export function spoiltLists(numRuns: number, seed: number): { read: number; refused: number } {
  const seen = { read: 0, refused: 0 };
  fc.assert(
    fc.property(
      fc.constantFrom(...BASES),
      fc.array(slip, { minLength: 1, maxLength: 6 }),
      fc.oneof({ weight: 3, arbitrary: fc.constant([]) }, fc.array(setting, { maxLength: 3 })),
      (base, slips, settings) => {
        seen[judge(spoilt(base, slips), settings)]++;
      },
    ),
    { numRuns, seed },
  );
  return seen;
}

/** Lists of any characters. */
export function anyCharacters(numRuns: number, seed: number): void {
  fc.assert(
    fc.property(fc.string({ unit: 'binary', maxLength: 60 }), (text) => {
      judge(text, []);
    }),
    { numRuns, seed },
  );
}
