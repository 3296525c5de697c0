import type { PlainKeys } from '../list/plain-layers.ts';
import type { WrittenValue } from '../list/written-list.ts';

/** A variant of a list to be written. */
export interface ListedChanges {
  readonly name: string;
  readonly layers: readonly PlainKeys[];
}

/**
 * A parts list as YAML: the list's own keys in their sections, then the variants with what they change. Every text that
 * could be read as anything else is quoted.
 */
export function partsListText(name: string, base: PlainKeys, variants: readonly ListedChanges[]): string {
  const lines: string[] = [];
  if (name !== '') lines.push(`name: ${scalar(name)}`, '');
  let section = '';
  for (const [key, value] of Object.entries(base).sort(([a], [b]) => order(a) - order(b))) {
    const dot = key.indexOf('.');
    if (dot < 0) {
      lines.push(`${key}: ${written(value)}`);
      continue;
    }
    const head = key.slice(0, dot);
    if (head !== section) lines.push(...(section === '' ? [] : ['']), `${head}:`);
    section = head;
    lines.push(...nested(key.slice(dot + 1), value, base, head));
  }
  if (variants.length > 0) lines.push(...(lines.length > 0 ? [''] : []), 'variants:');
  for (const variant of variants) {
    const changes = Object.entries(Object.assign({}, ...variant.layers) as PlainKeys);
    if (changes.length === 0) lines.push(`  ${scalar(variant.name)}: {}`);
    else lines.push(`  ${scalar(variant.name)}:`, ...changes.map(([key, value]) => `    ${key}: ${written(value)}`));
  }
  return `${lines.join('\n')}\n`;
}

const SECTIONS = ['station', 'tuned circuit', 'detector', 'plate', 'output', 'strays', 'tube'];

function order(key: string): number {
  const at = SECTIONS.indexOf(key.split('.')[0] as string);
  return at < 0 ? SECTIONS.length : at;
}

/** A key of a section; keys that lie deeper are written once, as a mapping in one line. */
function nested(key: string, value: WrittenValue, base: PlainKeys, head: string): string[] {
  const dot = key.indexOf('.');
  if (dot < 0) return [`  ${key}: ${written(value)}`];
  const outer = key.slice(0, dot);
  const prefix = `${head}.${outer}.`;
  const all = Object.entries(base).filter(([one]) => one.startsWith(prefix));
  if (all[0]?.[0] !== `${head}.${key}`) return [];
  return [`  ${outer}: ${flow(tree(all.map(([one, its]) => [one.slice(prefix.length).split('.'), its])))}`];
}

function tree(entries: readonly (readonly [readonly string[], WrittenValue])[]): WrittenValue {
  const root: Record<string, WrittenValue> = {};
  const heads = new Set(entries.map(([path]) => path[0] as string));
  for (const head of heads) {
    const own = entries.filter(([path]) => path[0] === head);
    const leaf = own.find(([path]) => path.length === 1);
    root[head] = leaf ? leaf[1] : tree(own.map(([path, value]) => [path.slice(1), value] as const));
  }
  return root;
}

function written(value: WrittenValue): string {
  return typeof value === 'object' ? flow(value) : scalar(String(value));
}

function flow(value: WrittenValue): string {
  if (typeof value !== 'object') return scalar(String(value));
  if (Array.isArray(value)) return `[${value.map(flow).join(', ')}]`;
  return `{ ${Object.entries(value)
    .map(([key, its]) => `${scalar(key)}: ${flow(its as WrittenValue)}`)
    .join(', ')} }`;
}

/** Plain where nothing of YAML can be meant, else in double quotes, which JSON's escapes fit (YAML 1.2, from memory). */
function scalar(text: string): string {
  const plain = /^[A-Za-z0-9.µΩ][A-Za-z0-9 .%/+µΩ()-]*$/u.test(text) && !/\s$/.test(text);
  const meant = /^(true|false|yes|no|on|off|null|none|~)$/i.test(text) || /^[\d.]+:[\d.]+$/.test(text);
  return plain && (!meant || text === 'none' || text === 'yes' || text === 'no') ? text : JSON.stringify(text);
}
