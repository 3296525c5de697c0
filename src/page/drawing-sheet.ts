import type { CircuitRecord, CostRow } from '../results/result.ts';
import { escapeXml, px, textWidth } from '../results/svg-text.ts';
import type { Point } from './drawing-symbols.ts';
import { partValues, valueIn, valueText } from './part-values.ts';

/** The part that costs most at the marked frequency. */
export interface CostMark {
  readonly part: keyof CostRow;
}

const HEIGHT = 452;
/** Heights of the chassis line, the grid, the plate and the top of the load; where the tube stands across. */
export const BUS = 420;
export const GRID = 286;
export const PLATE = 204;
export const TOP = 84;
export const TUBE_X = 374;
/** Where the drawing begins from above. */
const ABOVE = 22;
const TEXT = 16;

/** Draws one circuit; collects the box of each part whose cost is told. */
export class Sheet {
  private readonly parts: string[] = [];
  private readonly values: string[] = [];
  private readonly boxes = new Map<keyof CostRow, readonly [number, number, number, number]>();
  private readonly circuit: CircuitRecord;

  constructor(circuit: CircuitRecord) {
    this.circuit = circuit;
  }

  add(...drawn: readonly string[]): void {
    this.parts.push(...drawn);
  }

  /** Whether the circuit has that value. */
  has(key: string): boolean {
    const part = partValues(this.circuit).find((one) => one.key === key);
    return part !== undefined && valueIn(this.circuit, part) !== null;
  }

  /** The value of a part as a control beside it. */
  value(key: string, [x, y]: Point, anchor: 'start' | 'middle' | 'end' = 'start'): void {
    const part = partValues(this.circuit).find((one) => one.key === key);
    if (!part) return;
    const text = valueText(this.circuit, part);
    const width = Math.max(34, textWidth(text, TEXT) + 10);
    const left = anchor === 'start' ? x - 5 : anchor === 'end' ? x - width + 5 : x - width / 2;
    // assistive software wants a plain number there; the text has the unit
    const now = Number.parseFloat(text) || 0;
    this.values.push(
      `<g class="value" role="spinbutton" tabindex="0" data-key="${escapeXml(key)}" aria-label="${escapeXml(part.label)}" ` +
        `aria-valuenow="${now}" aria-valuetext="${escapeXml(text)}">` +
        `<rect x="${px(left)}" y="${px(y - 19)}" width="${px(width)}" height="27" rx="4"/>` +
        `<text x="${px(x)}" y="${px(y)}" text-anchor="${anchor}">${escapeXml(text)}</text></g>`,
    );
  }

  box(part: keyof CostRow, x: number, y: number, width: number, height: number): void {
    if (!this.boxes.has(part)) this.boxes.set(part, [x, y, width, height]);
  }

  svg(width: number, title: string, mark: CostMark | null): string {
    const box = mark ? this.boxes.get(mark.part) : undefined;
    const marked =
      mark && box
        ? `<rect class="mark" x="${px(box[0])}" y="${px(box[1])}" width="${px(box[2])}" height="${px(box[3])}" rx="6"/>`
        : '';
    return (
      `<svg class="circuit" width="${px(width)}" viewBox="0 ${ABOVE} ${px(width)} ${HEIGHT - ABOVE}" role="group" aria-label="${escapeXml(title)}">` +
      `${marked}<g class="lines">${this.parts.join('')}</g>${this.values.join('')}</svg>`
    );
  }
}
