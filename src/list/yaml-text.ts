import {
  type Alias,
  Composer,
  type CST,
  isAlias,
  isScalar,
  LineCounter,
  type Node,
  type ParsedNode,
  Parser,
  visit,
  type YAMLParseError,
} from 'yaml';
import type { Fault } from '../engine/errors.ts';

/** Where something stands in the list, counted from 1. */
export interface Place {
  readonly line: number;
  readonly column: number;
}

/** The text of a parts list as YAML nodes, with the places of its characters. */
export interface YamlText {
  /** Null where nothing is written, and where there are faults. */
  readonly root: ParsedNode | null;
  readonly faults: readonly Fault[];
  placeAt(offset: number): Place;
  /** The node itself, or what an alias stands for. */
  followed(node: Node | null): ParsedNode | null;
}

/** Longest text, most pieces and deepest nesting that are read: no hand-written list comes near, a hostile one may. */
const LONGEST_TEXT = 200_000;
const MOST_PIECES = 20_000;
const DEEPEST = 24;
const ORDINARY = 'a parts list of ordinary size, sections within sections at most';
const LINES = 'YAML: one key, a colon and a value a line, sections indented alike';

/** What a builder sees of the YAML reader's complaints; the others come in the reader's own words. */
const PLAIN_WORDS: Readonly<Record<string, readonly [got: string, hint: string]>> = {
  TAB_AS_INDENT: ['a tab at the start of the line', 'indent with spaces'],
  BLOCK_AS_IMPLICIT_KEY: ['two keys on one line', 'a value with a colon and a space in it stands in quotes'],
  MULTIPLE_DOCS: ['a second document after ---', 'one file describes one detector'],
};

/** Reads YAML. Its own nesting is judged before anything follows it in depth, so that no text can exhaust the machine. */
export function yamlText(text: string): YamlText {
  const lines = new LineCounter();
  const placeAt = (offset: number): Place => {
    const { line, col } = lines.linePos(offset);
    return { line: Math.max(line, 1), column: Math.max(col, 1) };
  };
  const refused = (faults: readonly Fault[]): YamlText => ({ root: null, faults, placeAt, followed: () => null });
  const plain = text.replace(/^\uFEFF/, '');
  if (plain.length > LONGEST_TEXT) {
    const got = `${plain.length} characters`;
    return refused([{ code: 'too-large', where: 'parts list', got, expected: ORDINARY, line: 1, column: 1 }]);
  }
  const tokens = [...new Parser(lines.addNewLine).parse(plain)];
  const beyond = tooDeep(tokens);
  if (beyond !== null) return refused([{ ...tooLarge('parts list'), ...placeAt(beyond) }]);
  const [document, second] = new Composer({ uniqueKeys: false }).compose(tokens, true, plain.length);
  const errors = [...(document?.errors ?? []), ...(second?.errors ?? [])];
  const faults = errors.map((error) => yamlFault(error, placeAt(error.pos[0])));
  if (second && errors.length === 0) {
    const [got, hint] = PLAIN_WORDS.MULTIPLE_DOCS as readonly [string, string];
    faults.push({
      code: 'not-yaml',
      where: 'parts list',
      got,
      expected: LINES,
      hint,
      ...placeAt(second.range?.[0] ?? 0),
    });
  }
  if (!document || faults.length > 0) return refused(faults);
  const { meanings, unknown } = aliasMeanings(document);
  if (unknown !== null) {
    const [got, expected] = [`*${unknown.source}`, `the name of an anchor above it, &${unknown.source}`];
    return refused([
      { code: 'unknown-alias', where: 'parts list', got, expected, ...placeAt(unknown.range?.[0] ?? 0) },
    ]);
  }
  return {
    root: document.contents,
    faults,
    placeAt,
    followed: (node) => (isAlias(node) ? (meanings.get(node) ?? null) : node) as ParsedNode | null,
  };
}

/** The fault of a list beyond all ordinary size. */
export function tooLarge(where: string): Fault {
  return { code: 'too-large', where, got: 'more, or deeper, than a parts list is', expected: ORDINARY };
}

/** Whether nothing is written at a node. */
export function isNothing(node: Node | null): node is null {
  return node === null || node === undefined || (isScalar(node) && (node.value === null || node.value === ''));
}

function yamlFault(error: YAMLParseError, place: Place): Fault {
  const [got, hint] = PLAIN_WORDS[error.code] ?? [error.message.replace(/:$/, '').trim(), ''];
  return { code: 'not-yaml', where: 'parts list', got, expected: LINES, ...(hint === '' ? {} : { hint }), ...place };
}

/** Offset of the first piece that is nested too deeply or one too many, or null. Its own stack, as texts can nest at will. */
function tooDeep(tokens: readonly CST.Token[]): number | null {
  const waiting: { token: CST.Token; depth: number }[] = tokens.map((token) => ({ token, depth: 0 }));
  let pieces = 0;
  for (let next = waiting.pop(); next; next = waiting.pop()) {
    const { token, depth } = next;
    if (depth > DEEPEST || ++pieces > MOST_PIECES) return token.offset;
    if (token.type === 'document' && token.value) waiting.push({ token: token.value, depth });
    if (!('items' in token)) continue;
    for (const { key, value, start, sep } of token.items) {
      // comments, spaces, and rows of anchors before nothing
      pieces += start.length + (sep?.length ?? 0);
      if (key) waiting.push({ token: key, depth: depth + 1 });
      if (value) waiting.push({ token: value, depth: depth + 1 });
    }
  }
  return null;
}

interface AliasMeanings {
  readonly meanings: ReadonlyMap<Node, Node>;
  /** The first alias that no anchor before it names. */
  readonly unknown: Alias | null;
}

/** What each alias stands for: the node that bore its anchor last before it. An alias never leads to another. */
function aliasMeanings(document: Parameters<typeof visit>[0]): AliasMeanings {
  const anchored = new Map<string, Node>();
  const meanings = new Map<Node, Node>();
  let unknown: Alias | null = null;
  visit(document, {
    Node: (_, node) => {
      if (isAlias(node)) {
        const meaning = anchored.get(node.source);
        if (meaning) meanings.set(node, meaning);
        else unknown ??= node;
      } else if ('anchor' in node && typeof node.anchor === 'string') anchored.set(node.anchor, node);
    },
  });
  return { meanings, unknown };
}
