import { isAlias, isMap, isScalar, isSeq, LineCounter, type Node, type ParsedNode, parseDocument } from 'yaml';
import type * as z from 'zod';
import type { Fault } from '../engine/errors.ts';
import { mappingShape, nearestKey } from './dotted-keys.ts';
import { CHANGEABLE, circuitShape, partsList } from './schema.ts';
import { plainWords } from './words.ts';

/** Where something stands in the list, counted from 1. */
export interface Place {
  readonly line: number;
  readonly column: number;
}

/** A value as a person wrote it; a table of rows comes as an array of mappings. */
export type WrittenValue = string | number | readonly WrittenValue[] | { readonly [key: string]: WrittenValue };

export interface WrittenEntry {
  readonly value: WrittenValue;
  readonly place: Place;
  /** Places of whatever lies deeper than the key: `tube.rows.0.current`. */
  readonly deepPlaces?: ReadonlyMap<string, Place>;
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
  readonly name: WrittenEntry | null;
  readonly base: WrittenKeys;
  readonly variants: readonly WrittenVariant[];
  readonly faults: readonly Fault[];
}

type Shape = Readonly<Record<string, z.core.$ZodType>>;

/** Deepest nesting and most values that are followed: no hand-written list comes near, a hostile one may. */
const DEEPEST = 8;
const MOST_VALUES = 5000;

/** Reads the text of a parts list into dotted keys with their places. Faults are collected, never thrown. */
export function writtenList(text: string): WrittenList {
  return new Reader(text).read();
}

class Reader {
  private readonly lines = new LineCounter();
  private readonly faults: Fault[] = [];
  private readonly document: ReturnType<typeof parseDocument>;
  private count = 0;

  constructor(text: string) {
    this.document = parseDocument(text.replace(/^\uFEFF/, ''), { lineCounter: this.lines, prettyErrors: false });
  }

  read(): WrittenList {
    const base: WrittenKeys = new Map();
    const variants: WrittenVariant[] = [];
    let name: WrittenEntry | null = null;
    for (const error of this.document.errors) {
      this.fault(
        'not-yaml',
        'parts list',
        this.placeAt(error.pos[0]),
        plainError(error.message),
        'YAML: one key, a colon and a value a line, sections indented alike',
      );
    }
    const root = this.document.contents;
    if (this.faults.length === 0 && root !== null && !(isScalar(root) && root.value === null)) {
      if (!isMap(root)) {
        this.fault(
          'not-a-list',
          'parts list',
          this.place(root),
          'text that is no parts list',
          'sections such as detector:, plate:, variants:',
        );
      } else {
        for (const [key, node, place] of this.pairs(root, Object.keys(partsList.shape), '')) {
          if (key === 'name') name = this.leaf('name', node, place);
          else if (key === 'variants') variants.push(...this.readVariants(node, place));
          else
            this.section(key, node, place, mappingShape((circuitShape as Shape)[key] as z.core.$ZodType) ?? {}, base);
        }
      }
    }
    return { name, base, variants, faults: this.faults };
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
      const name = isScalar(pair.key)
        ? String(pair.key.source ?? pair.key.value)
            .replace(/\s+/g, ' ')
            .trim()
        : '';
      const changes: WrittenKeys = new Map();
      if (name === '' || name.length > 80) {
        this.fault('bad-name', 'variants', at, name || 'nothing', 'a name of 1 to 80 characters');
        return [];
      }
      const value = this.followed(pair.value as ParsedNode | null);
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
      const written = prefix + plainWords(isScalar(pair.key) ? String(pair.key.value) : '');
      const known = [...CHANGEABLE.keys()];
      const key = known.find((one) => one.toLowerCase() === written.toLowerCase());
      const value = this.followed(pair.value as ParsedNode | null);
      const section = known.some((one) => one.toLowerCase().startsWith(`${written.toLowerCase()}.`));
      if (section && isMap(value) && this.deeper(written)) this.changes(value, `${written}.`, into, label);
      else if (key === undefined) this.unknown(label + written, at, written, nearestKey(written, known));
      else if (into.has(key)) this.fault('given-twice', label + key, at, 'the same key again', 'each key once');
      else this.keep(key, value, at, into);
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
    if (!this.deeper(prefix)) return;
    for (const [key, value, at] of this.pairs(node, Object.keys(shape), `${prefix}.`)) {
      const inner = mappingShape(shape[key] as z.core.$ZodType);
      if (inner && (isMap(value) || !CHANGEABLE.has(`${prefix}.${key}`))) {
        this.section(`${prefix}.${key}`, value, at, inner, into);
      } else this.keep(`${prefix}.${key}`, value, at, into);
    }
  }

  private keep(key: string, node: ParsedNode | null, place: Place, into: WrittenKeys): void {
    if (isMap(node) && key === 'plate.load') {
      this.section(key, node, place, mappingShape(circuitShape.plate.unwrap().shape.load) ?? {}, into);
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
      const written = plainWords(isScalar(pair.key) ? String(pair.key.value) : '');
      const key = known.find((one) => one.toLowerCase() === written.toLowerCase());
      if (key === undefined) {
        this.unknown(prefix + written, at, written, nearestKey(written, known), known);
      } else if (seen.has(key)) {
        this.fault('given-twice', prefix + key, at, 'the same key again', 'each key once');
      } else {
        seen.add(key);
        const value = this.followed(pair.value as ParsedNode | null);
        yield [key, value, value && !isNothing(value) ? this.place(value) : at];
      }
    }
  }

  private leaf(key: string, node: ParsedNode | null, place: Place): WrittenEntry | null {
    const deepPlaces = new Map<string, Place>();
    const value = this.plain(node, key, 0, deepPlaces);
    if (value !== null) return { value, place, deepPlaces };
    this.fault('no-value', key, place, 'nothing', 'a value after the colon, or no such line');
    return null;
  }

  /** A node as plain data, places kept; null where nothing is written. */
  private plain(found: Node | null, path: string, depth: number, places: Map<string, Place>): WrittenValue | null {
    const node = this.followed(found as ParsedNode | null);
    if (isNothing(node) || depth > DEEPEST || ++this.count > MOST_VALUES) return null;
    places.set(path, this.place(node as Node));
    if (isScalar(node)) {
      const { value } = node;
      if (typeof value === 'number' && /^[-+]?[\d.]/.test(node.source ?? '')) return value;
      return typeof value === 'string' ? value : String(node.source ?? value);
    }
    if (isSeq(node))
      return node.items.map((item, n) => this.plain(item as Node, `${path}.${n}`, depth + 1, places) ?? '');
    if (!isMap(node)) return null;
    const entries = node.items.map((pair): [string, WrittenValue] => {
      const key = plainWords(isScalar(pair.key) ? String(pair.key.value) : '');
      places.set(`${path}.${key}`, this.place(pair.key as Node));
      return [key, this.plain(pair.value as Node | null, `${path}.${key}`, depth + 1, places) ?? ''];
    });
    return Object.fromEntries(entries);
  }

  private followed(node: ParsedNode | null): ParsedNode | null {
    let found: Node | null = node;
    for (let hops = 0; isAlias(found) && hops < DEEPEST; hops++) found = found.resolve(this.document) ?? null;
    return isAlias(found) ? null : (found as ParsedNode | null);
  }

  private deeper(path: string): boolean {
    if (path.split('.').length <= DEEPEST && ++this.count <= MOST_VALUES) return true;
    this.faults.push({
      code: 'too-deep',
      where: path.slice(0, 80),
      got: 'sections within sections',
      expected: 'a parts list of ordinary size',
    });
    return false;
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
    return this.placeAt(node?.range?.[0] ?? 0);
  }

  private placeAt(offset: number): Place {
    const { line, col } = this.lines.linePos(offset);
    return { line: Math.max(line, 1), column: Math.max(col, 1) };
  }
}

function isNothing(node: Node | null): node is null {
  return node === null || node === undefined || (isScalar(node) && (node.value === null || node.value === ''));
}

/** What stands at a node, short enough for a message. */
function shown(node: Node | null): string {
  if (isMap(node)) return 'a mapping';
  if (isSeq(node)) return 'a row of values';
  const text = isScalar(node) ? String(node.source ?? node.value) : 'nothing';
  return text.length > 60 ? `${text.slice(0, 57)}...` : text;
}

/** The YAML reader's own message without its marks of position, which are given apart. */
function plainError(message: string): string {
  const first = message.split('\n')[0] ?? message;
  return first
    .replace(/ at line \d+.*$/, '')
    .replace(/:$/, '')
    .trim();
}
