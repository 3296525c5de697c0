import { responseCsv } from '../results/response-csv.ts';
import { responseMarkdown } from '../results/response-markdown.ts';
import { responseSvg } from '../results/response-plot.ts';
import type { Result } from '../results/result.ts';
import { resultJson } from '../results/result-json.ts';
import type { ResultFile } from './result-folder.ts';

/** Tables, plot and result file of a result. */
export function paperFiles(result: Result): ResultFile[] {
  return [
    { name: 'result.json', contents: resultJson(result) },
    { name: 'response.csv', contents: responseCsv(result) },
    { name: 'response.md', contents: responseMarkdown(result) },
    { name: 'response.svg', contents: responseSvg(result) },
  ];
}
