import { gatherCautions, gatheredText } from './caution-list.ts';
import { markdownText } from './response-markdown.ts';
import type { SpreadResult, SpreadVariant } from './spread-result.ts';
import { type SpreadTable, spreadMethod, spreadSentences, spreadTables } from './spread-tables.ts';

/** The tables of a spread as Markdown to paste into a write-up, a heading a variant. */
export function spreadMarkdown(result: SpreadResult): string {
  const sections = result.variants.map((variant) => section(result, variant));
  const cautions = gatherCautions(result.variants).map((caution) => {
    const who = caution.names.length === 0 ? '' : `**${markdownText(caution.names.join(', '))}:** `;
    return `- ${who}${markdownText(gatheredText(caution))}\n`;
  });
  const list = cautions.length === 0 ? '' : `\n### Cautions\n\n${cautions.join('')}`;
  return `${markdownText(spreadMethod(result))}\n\n${sections.join('\n')}${list}`;
}

function section(result: SpreadResult, variant: SpreadVariant): string {
  const sentences = spreadSentences(variant).map((sentence) => `${markdownText(sentence)}\n\n`);
  const tables = spreadTables(result, variant).map(tableText);
  return `### ${markdownText(variant.name)}\n\n${sentences.join('')}${tables.join('\n')}`;
}

function tableText({ title, note, heads, rows }: SpreadTable): string {
  const line = (cells: readonly string[]): string => `| ${cells.map(markdownText).join(' | ')} |\n`;
  const rule = heads.map((_, column) => (column === 0 ? '---' : '---:'));
  return `#### ${markdownText(title)}\n\n${markdownText(note)}\n\n${line(heads)}| ${rule.join(' | ')} |\n${rows.map(line).join('')}`;
}
