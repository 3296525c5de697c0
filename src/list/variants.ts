import { type Fault, InputError } from '../engine/errors.ts';
import { type BuiltCircuit, buildCircuit } from './build-circuit.ts';
import { nearestKey } from './dotted-keys.ts';
import { type Layer, placed, readLayers } from './layers.ts';
import { type PlainKeys, plainKeys } from './plain-layers.ts';
import { CHANGEABLE } from './schema.ts';
import { foldedName, plainName, plainWords } from './words.ts';
import { type WrittenKeys, type WrittenList, type WrittenVariant, writtenList } from './written-list.ts';

/** A key set over the list, as a flag gives it; a comma list in the value makes variants. */
export interface Setting {
  readonly key: string;
  readonly value: string;
  readonly where: string;
  /** Whether commas belong to the value: a text to be sent makes one variant. */
  readonly whole?: boolean;
}

/** One circuit of a run. */
export interface ListedVariant extends BuiltCircuit {
  readonly name: string;
  /** Dotted key to the value as written, for all that the list's own variants and the flags changed. */
  readonly changes: Readonly<Record<string, string>>;
  /** Name of the whole list; null when it has none. */
  readonly listName: string | null;
  /** All that was written for this circuit, later layers over earlier ones: the list's own keys come first. */
  readonly layers: readonly PlainKeys[];
}

/** Most variants of one run: more than can be told apart by ear, and as many as a plot can show. */
export const MOST_VARIANTS = 24;
/** Faults that are told of at once: enough to mend in one pass. */
const MOST_FAULTS = 50;
const NO_PLACE = { line: 0, column: 0 } as const;

/** A circuit of a run as written: its layers over the list's own keys. */
export interface Drafted {
  readonly name: string;
  /** Flag whose comma list made it, if one did. */
  readonly flag?: string;
  readonly line?: number;
  readonly column?: number;
  readonly changes: WrittenKeys;
  readonly layers: readonly Layer[];
}

/**
 * All variants of a parts list with the flags over it: the list's variants, times every comma list.
 *
 * @param text      the list, YAML; empty gives the standard one-tube set
 * @param fileName  as the person gave it, for faults
 * @returns 1 to 24 variants, names all different
 * @throws InputError with every fault found, each with its place in the list or its flag
 */
export function listVariants(text: string, fileName: string, settings: readonly Setting[] = []): ListedVariant[] {
  const { listName, base, drafts, inFile } = draftedVariants(text, fileName, settings);
  const found = new Map<string, Fault>();
  const note = (fault: Fault): void => {
    found.set(`${fault.code} ${fault.where} ${fault.line} ${fault.column} ${fault.got}`, inFile(fault));
  };
  for (const fault of sameNames(drafts)) note(fault);
  const variants: ListedVariant[] = [];
  for (const draft of drafts) {
    const read = readLayers([{ keys: base }, ...draft.layers]);
    if ('faults' in read) {
      read.faults.forEach(note);
      continue;
    }
    try {
      const layers = [base, ...draft.layers.map(({ keys }) => keys)].map(plainKeys);
      variants.push({ name: draft.name, changes: changesText(draft), listName, layers, ...buildCircuit(read.list) });
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      for (const fault of error.faults) note(placed(fault, read.places));
    }
  }
  if (found.size > 0) throw new InputError([...found.values()].slice(0, MOST_FAULTS));
  return variants;
}

/** The variants of a list with the flags over it, as written: no value has been read. Throws InputError. */
export function draftedVariants(
  text: string,
  fileName: string,
  settings: readonly Setting[],
): {
  readonly listName: string | null;
  readonly base: WrittenKeys;
  readonly drafts: readonly Drafted[];
  readonly inFile: (fault: Fault) => Fault;
} {
  const inFile = (fault: Fault): Fault => (fault.line === undefined ? fault : { ...fault, file: fileName });
  const list = writtenList(text);
  const flags = settings.map(readSetting);
  const faults: Fault[] = [...list.faults, ...flags.flatMap((flag) => ('fault' in flag ? [flag.fault] : []))];
  if (faults.length > 0) throw new InputError(faults.slice(0, MOST_FAULTS).map(inFile));
  const drafts = draftVariants(list, flags as readonly FlagValues[], fileName);
  return { listName: list.name, base: list.base, drafts, inFile };
}

/** Dotted key to the value as written, for all that a variant changes. */
export function changesText(draft: Drafted): Record<string, string> {
  return Object.fromEntries([...draft.changes].map(([key, { value }]) => [key, asText(value)]));
}

interface FlagValues {
  readonly key: string;
  readonly values: readonly string[];
  readonly where: string;
}

function readSetting({ key: written, value, where, whole }: Setting): FlagValues | { readonly fault: Fault } {
  const plain = plainWords(written).toLowerCase();
  const known = [...CHANGEABLE.keys()];
  const key = known.find((one) => one.toLowerCase() === plain);
  if (key === undefined) {
    const near = nearestKey(plain, known);
    const hint = near === null ? {} : { hint: `nearest: ${near}` };
    return { fault: { code: 'unknown-key', where, got: written, expected: 'a key of the parts list', ...hint } };
  }
  const values = (whole ? [value] : value.split(',')).map((one) => one.trim());
  if (values.some((one) => one === '')) {
    return {
      fault: { code: 'no-value', where, got: value || 'nothing', expected: 'a value, or values with commas between' },
    };
  }
  return { key, values: [...new Set(values)], where };
}

function draftVariants(list: WrittenList, flags: readonly FlagValues[], fileName: string): Drafted[] {
  // of two flags for one key the later stands
  const last = [...new Map(flags.map((flag) => [flag.key, flag])).values()];
  const set = new Set(last.map((flag) => flag.key));
  const listed = withoutRepeats(
    list.variants.map((variant) => fromList(variant, set)),
    set,
  );
  const total = last.reduce((product, flag) => product * flag.values.length, Math.max(listed.length, 1));
  if (total > MOST_VARIANTS) {
    throw new InputError({
      code: 'too-many-variants',
      where: fileName,
      got: `${total} variants`,
      expected: `at most ${MOST_VARIANTS}`,
      hint: 'comma lists multiply with each other and with the variants of the list',
    });
  }
  let drafts: Drafted[] = listed.length > 0 ? listed : [{ name: '', changes: new Map(), layers: [] }];
  for (const { key, values, where } of last) {
    drafts = drafts.flatMap((draft) =>
      values.map((value): Drafted => {
        const keys: WrittenKeys = new Map([[key, { value, place: NO_PLACE }]]);
        const part = values.length > 1 ? variantPart(key, value) : '';
        return {
          ...draft,
          ...(part === '' ? {} : { flag: where }),
          name: [draft.name, part].filter((text) => text !== '').join(', '),
          changes: new Map([...draft.changes, ...keys]),
          layers: [...draft.layers, { keys, flag: where }],
        };
      }),
    );
  }
  const whole = list.name ?? 'as drawn';
  return drafts.map((draft) => (draft.name === '' ? { ...draft, name: whole } : draft));
}

/** A variant of the list; what a flag sets anyway, a load's own values with the load, is no longer its own. */
function fromList(variant: WrittenVariant, set: ReadonlySet<string>): Drafted {
  const own = [...variant.changes].filter(([key]) => ![...set].some((one) => key === one || key.startsWith(`${one}.`)));
  const changes: WrittenKeys = new Map(own);
  return { name: variant.name, ...variant.place, changes, layers: [{ keys: changes }] };
}

/** Flags over the very key that told the list's variants apart leave several alike: the first of them stands for all. */
function withoutRepeats(drafts: readonly Drafted[], set: ReadonlySet<string>): Drafted[] {
  if (set.size === 0) return [...drafts];
  const kept = new Map<string, Drafted>();
  for (const draft of drafts) {
    const key = JSON.stringify([...draft.changes].map(([name, { value }]) => [name, value]));
    if (!kept.has(key)) kept.set(key, draft);
  }
  return [...kept.values()];
}

function sameNames(drafts: readonly Drafted[]): Fault[] {
  const seen = new Map<string, string>();
  return drafts.flatMap((draft): Fault[] => {
    const folded = foldedName(draft.name);
    const other = seen.get(folded);
    seen.set(folded, draft.name);
    if (other === undefined) return [];
    const inList = draft.flag === undefined && draft.line !== undefined;
    const at = inList ? { line: draft.line as number, column: draft.column as number } : {};
    const expected = `a name of its own (there is already ${JSON.stringify(other)})`;
    return [{ code: 'same-name', where: draft.flag ?? 'variants', got: JSON.stringify(draft.name), expected, ...at }];
  });
}

/** What a value of a comma list adds to its variant's name; a fault speaks for itself. */
function variantPart(key: string, value: string): string {
  if (key === 'fault') return /^none$/i.test(value) ? 'no fault' : plainName(value);
  return `${shortKey(key)} ${plainName(value)}`;
}

function shortKey(key: string): string {
  return key.slice(key.lastIndexOf('.') + 1);
}

function asText(value: unknown): string {
  return typeof value === 'object' ? JSON.stringify(value) : String(value);
}
