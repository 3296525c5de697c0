import { isMap, isScalar, isSeq, type Node, type ParsedNode } from 'yaml';
import type * as z from 'zod';
import { type Fault, InputError } from '../engine/errors.ts';
import { AIR_LINES, airLineExample } from './air-lines.ts';
import { mappingShape, nearestKey } from './dotted-keys.ts';
import { CHANGEABLE, circuitShape, partsList } from './schema.ts';
import { plainName, plainWords } from './words.ts';
import { isNothing, type Place, tooLarge, type YamlText, yamlText } from './yaml-text.ts';

/** A value as a person wrote it; a table of rows comes as an array of mappings. */
export type WrittenValue = string | number | readonly WrittenValue[] | { readonly [key: string]: WrittenValue };

export interface WrittenEntry {
  readonly value: WrittenValue;
  readonly place: Place;
  /** Places of the values, and of the keys, that lie deeper: `tube.rows.0.current`. */
  readonly deepPlaces?: DeepPlaces;
}

export interface DeepPlaces {
  readonly values: Map<string, Place>;
  readonly keys: Map<string, Place>;
}

/** Dotted keys of the parts list, each with its value and place. */
export type WrittenKeys = Map<string, WrittenEntry>;

export interface WrittenVariant {
  readonly name: string;
  readonly place: Place;
  readonly changes: WrittenKeys;
}

/** A parts list as written: no value has been read yet, every key is a known one. */
export interface WrittenList {
  readonly name: string | null;
  readonly base: WrittenKeys;
  readonly variants: readonly WrittenVariant[];
  readonly faults: readonly Fault[];
}

type Shape = Readonly<Record<string, z.core.$ZodType>>;

/** Deepest rows within rows, and most values, aliases counted as often as they are followed. */
const DEEPEST = 8;
const MOST_VALUES = 5000;
/** Faults after which reading stops: enough to mend in one pass. */
const MOST_FAULTS = 50;
const NAME_EXPECTED = 'a name of 1 to 80 characters';

/** Reads the text of a parts list into dotted keys with their places. Faults are collected, never thrown. */
export function writtenList(text: string): WrittenList {
  return new Reader(text).read();
}

class Reader {
  private readonly text: YamlText;
  private readonly faults: Fault[];
  private count = 0;

  constructor(text: string) {
    this.text = yamlText(text);
    this.faults = [...this.text.faults];
  }

  read(): WrittenList {
    const base: WrittenKeys = new Map();
    const variants: WrittenVariant[] = [];
    let name: string | null = null;
    try {
      const { root } = this.text;
      if (isMap(root)) {
        for (const [key, node, place] of this.pairs(root, Object.keys(partsList.shape), '')) {
          if (key === 'name') name = this.readName(node, 'name', place);
          else if (key === 'variants') variants.push(...this.readVariants(node, place));
          else if (CHANGEABLE.has(key)) this.keep(key, node, place, base);
          else {
            const shape = mappingShape((circuitShape as Shape)[key] as z.core.$ZodType) ?? {};
            this.section(key, node, place, shape, base);
          }
        }
      } else if (!isNothing(root)) {
        const expected = 'sections such as detector:, plate:, variants:';
        this.fault('not-a-list', 'parts list', this.place(root), 'text that is no parts list', expected);
      }
    } catch (error) {
      // reading ends at once where there is too much of it
      if (!(error instanceof InputError)) throw error;
      this.faults.push(...error.faults);
    }
    return { name, base, variants, faults: this.faults.slice(0, MOST_FAULTS) };
  }

  /** A name on one line, or null with a fault. */
  private readName(node: Node | null, where: string, at: Place): string | null {
    const text = isScalar(node) && !isNothing(node) ? plainName(String(node.source ?? node.value)) : '';
    if (text !== '' && text.length <= 80) return text;
    this.fault('bad-name', where, at, text || (isScalar(node) ? 'nothing' : shown(node)), NAME_EXPECTED);
    return null;
  }

  private readVariants(node: ParsedNode | null, place: Place): WrittenVariant[] {
    if (isNothing(node)) return [];
    if (!isMap(node)) {
      this.fault(
        'wrong-kind',
        'variants',
        place,
        shown(node),
        'names with what changes, such as brighter: { plate.bypass: 100p }',
      );
      return [];
    }
    return node.items.flatMap((pair) => {
      const at = this.place(pair.key as Node);
      this.spend('variants', at);
      const name = this.readName(pair.key as Node | null, 'variants', at);
      if (name === null) return [];
      const changes: WrittenKeys = new Map();
      const value = this.text.followed(pair.value as Node | null);
      if (isNothing(value)) return [{ name, place: at, changes }];
      if (!isMap(value)) {
        this.fault(
          'wrong-kind',
          `variants.${name}`,
          this.place(value),
          shown(value),
          'what changes, such as { plate.bypass: 100p }, or {} for none',
        );
        return [];
      }
      this.changes(value, '', changes, `variants.${name}.`);
      return [{ name, place: at, changes }];
    });
  }

  /** Changes of a variant: dotted keys, or sections with their keys, in any mixture. */
  private changes(node: Node, prefix: string, into: WrittenKeys, label: string): void {
    if (!isMap(node)) return;
    for (const pair of node.items) {
      const at = this.place(pair.key as Node);
      this.spend(label + prefix, at);
      const written = prefix + plainWords(isScalar(pair.key) ? String(pair.key.value) : '');
      const known = [...CHANGEABLE.keys()];
      const key = known.find((one) => one.toLowerCase() === written.toLowerCase());
      const value = this.text.followed(pair.value as Node | null);
      const section = known.some((one) => one.toLowerCase().startsWith(`${written.toLowerCase()}.`));
      if (section && isMap(value)) this.changes(value, `${written}.`, into, label);
      else if (section && key === undefined) {
        if (isNothing(value)) continue;
        const expected = 'its keys with what changes, such as { plate.bypass: 100p }';
        this.fault('wrong-kind', label + written, this.place(value), shown(value), expected);
      } else if (key === undefined) this.unknown(label + written, at, written, nearestKey(written, known));
      else if (into.has(key)) this.fault('given-twice', label + key, at, 'the same key again', 'each key once');
      else this.keep(key, value, isNothing(value) ? at : this.place(value), into);
    }
  }

  private section(prefix: string, node: ParsedNode | null, place: Place, shape: Shape, into: WrittenKeys): void {
    if (isNothing(node)) return;
    if (!isMap(node)) {
      this.fault(
        'wrong-kind',
        prefix,
        place,
        shown(node),
        `its keys, indented below it: ${Object.keys(shape).join(', ')}`,
      );
      return;
    }
    // nothing of it would be heard
    if (node.items.length === 0 && AIR_LINES.has(prefix)) {
      const expected = `some of ${Object.keys(shape).join(', ')}, or one line such as ${airLineExample(prefix)}`;
      this.fault('no-value', prefix, place, 'nothing in it', expected);
    }
    for (const [key, value, at] of this.pairs(node, Object.keys(shape), `${prefix}.`)) {
      const inner = mappingShape(shape[key] as z.core.$ZodType);
      if (inner && (isMap(value) || !CHANGEABLE.has(`${prefix}.${key}`))) {
        this.section(`${prefix}.${key}`, value, at, inner, into);
      } else this.keep(`${prefix}.${key}`, value, at, into);
    }
  }

  private keep(key: string, node: ParsedNode | null, place: Place, into: WrittenKeys): void {
    const field = CHANGEABLE.get(key);
    const shape = isMap(node) && field ? mappingShape(field) : null;
    if (shape) {
      this.section(key, node, place, shape, into);
      return;
    }
    const entry = this.leaf(key, node, place);
    if (entry) into.set(key, entry);
  }

  /** Known pairs of a mapping, keys in this program's words; the others become faults. */
  private *pairs(node: Node, known: readonly string[], prefix: string): Generator<[string, ParsedNode | null, Place]> {
    if (!isMap(node)) return;
    const seen = new Set<string>();
    for (const pair of node.items) {
      const at = this.place(pair.key as Node);
      this.spend(prefix, at);
      const written = plainWords(isScalar(pair.key) ? String(pair.key.value) : '');
      const key = known.find((one) => one.toLowerCase() === written.toLowerCase());
      if (key === undefined) {
        this.unknown(prefix + written, at, written, nearestKey(written, known), known);
      } else if (seen.has(key)) {
        this.fault('given-twice', prefix + key, at, 'the same key again', 'each key once');
      } else {
        seen.add(key);
        const value = this.text.followed(pair.value as Node | null);
        yield [key, value, isNothing(value) ? at : this.place(value)];
      }
    }
  }

  private leaf(key: string, node: ParsedNode | null, place: Place): WrittenEntry | null {
    const deepPlaces: DeepPlaces = { values: new Map(), keys: new Map() };
    const value = this.plain(node, key, 0, deepPlaces);
    if (value !== null) return { value, place, deepPlaces };
    this.fault('no-value', key, place, 'nothing', 'a value after the colon, or no such line');
    return null;
  }

  /** A node as plain data, values as they were written, places kept; null where nothing is written. */
  private plain(found: Node | null, path: string, depth: number, places: DeepPlaces): WrittenValue | null {
    const node = this.text.followed(found);
    if (isNothing(node)) return null;
    this.spend(path, this.place(node), depth);
    places.values.set(path, this.place(node));
    if (isScalar(node)) return typeof node.value === 'string' ? node.value : String(node.source ?? node.value);
    if (isSeq(node)) {
      return node.items.map((item, n) => this.plain(item as Node, `${path}.${n}`, depth + 1, places) ?? '');
    }
    if (!isMap(node)) return null;
    const entries = new Map<string, WrittenValue>();
    for (const pair of node.items) {
      const key = plainWords(isScalar(pair.key) ? String(pair.key.value) : '');
      const at = this.place(pair.key as Node);
      if (entries.has(key)) this.fault('given-twice', `${path}.${key}`, at, 'the same key again', 'each key once');
      places.keys.set(`${path}.${key}`, at);
      entries.set(key, this.plain(pair.value as Node | null, `${path}.${key}`, depth + 1, places) ?? '');
    }
    return Object.fromEntries(entries);
  }

  /** Counts a value; throws where there are more of them, or deeper, than in any list written by hand. */
  private spend(where: string, at: Place, depth = 0): void {
    if (depth > DEEPEST || ++this.count > MOST_VALUES || this.faults.length > MOST_FAULTS) {
      throw new InputError({ ...tooLarge(where), ...at });
    }
  }

  private unknown(where: string, at: Place, got: string, near: string | null, known: readonly string[] = []): void {
    const expected = known.length > 0 && known.length <= 12 ? `one of ${known.join(', ')}` : 'a key of the parts list';
    this.faults.push({
      code: 'unknown-key',
      where,
      got: got || 'no key',
      expected,
      ...(near === null ? {} : { hint: `nearest: ${near}` }),
      ...at,
    });
  }

  private fault(code: string, where: string, at: Place, got: string, expected: string): void {
    this.faults.push({ code, where, got, expected, ...at });
  }

  private place(node: Node): Place {
    return this.text.placeAt(node?.range?.[0] ?? 0);
  }
}

/** What stands at a node, short enough for a message. */
function shown(node: Node | null): string {
  if (isMap(node)) return 'a mapping';
  if (isSeq(node)) return 'a row of values';
  const text = isScalar(node) ? String(node.source ?? node.value) : 'nothing';
  return text.length > 60 ? `${text.slice(0, 57)}...` : text;
}
