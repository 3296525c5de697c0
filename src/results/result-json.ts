import type { Result } from './result.ts';
import type { SpreadResult } from './spread-result.ts';

/**
 * The result file's text: JSON with two spaces of indent and a line end, no number rounded.
 *
 * @throws Error naming the path of the first number that is not finite, which JSON would turn into `null` silently: a
 *   fault of the program, never of the input
 */
export function resultJson(result: Result | SpreadResult): string {
  refuseNonFinite(result, 'result');
  return `${JSON.stringify(result, null, 2)}\n`;
}

function refuseNonFinite(value: unknown, path: string): void {
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new Error(`internal: ${path} is ${value}`);
  } else if (Array.isArray(value)) {
    for (const [index, item] of value.entries()) refuseNonFinite(item, `${path}[${index}]`);
  } else if (typeof value === 'object' && value !== null) {
    for (const [key, item] of Object.entries(value)) {
      refuseNonFinite(item, /^[A-Za-z]\w*$/.test(key) ? `${path}.${key}` : `${path}[${JSON.stringify(key)}]`);
    }
  }
}
