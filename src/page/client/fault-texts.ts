import { InputError } from '../../engine/errors.ts';
import { faultText } from '../../results/fault-text.ts';

/** What went wrong, as sentences for whoever sits before the page. */
export function faultTexts(fault: unknown): string[] {
  if (fault instanceof InputError) return fault.faults.map(faultText);
  return [`A fault of the page, not of your input: ${fault instanceof Error ? fault.message : String(fault)}`];
}
