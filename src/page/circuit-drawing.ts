import type { CircuitRecord, CostRow } from '../results/result.ts';
import { escapeXml, px, textWidth } from '../results/svg-text.ts';
import {
  aerial,
  capacitor,
  chassis,
  coil,
  core,
  joint,
  label,
  type Point,
  phones,
  resistor,
  terminal,
  triode,
  wire,
} from './drawing-symbols.ts';
import { partValues, valueText } from './part-values.ts';

/** The part that costs most at the marked frequency. */
export interface CostMark {
  readonly part: keyof CostRow;
  readonly text: string;
}

const HEIGHT = 452;
/** Line of the cathode, line of the grid, line of the plate, line of the supply. */
const BUS = 420;
const GRID = 286;
const PLATE = 204;
const TOP = 84;
const TUBE_X = 374;
/** Where the drawing begins from above. */
const ABOVE = 22;
const TEXT = 16;

/** Draws one circuit; collects the box of each part whose cost is told. */
class Sheet {
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

/**
 * The detector as a drawing in standard symbols, signal from left to right, supply on top. Every value is a control; the
 * part that costs most is framed.
 */
export function circuitDrawing(circuit: CircuitRecord, title: string, mark: CostMark | null): string {
  const sheet = new Sheet(circuit);
  drawTunedCircuit(sheet, circuit);
  drawGrid(sheet, circuit);
  drawTube(sheet, circuit);
  const right = drawPlate(sheet, circuit);
  sheet.add(
    wire([56, BUS], [right, BUS]),
    wire([TUBE_X - 18, BUS], [TUBE_X - 18, BUS + 12]),
    chassis([TUBE_X - 18, BUS + 12]),
  );
  return sheet.svg(right + 96, title, mark);
}

function drawTunedCircuit(sheet: Sheet, { tunedCircuit, station }: CircuitRecord): void {
  sheet.add(
    aerial([56, GRID - 116]),
    wire([56, GRID - 116], [56, GRID]),
    coil([56, GRID], [56, BUS]),
    wire([56, GRID], [218, GRID]),
    capacitor([160, GRID], [160, BUS], true),
    joint([56, GRID]),
    joint([160, GRID]),
    joint([160, BUS]),
  );
  sheet.box('tunedCircuit', 34, GRID + 14, 156, BUS - GRID - 28);
  if (station.carrierHertz > 0) sheet.value('station.carrier', [78, GRID - 140]);
  sheet.value('station.level', [78, GRID - 112]);
  sheet.value('station.modulation', [78, GRID - 84]);
  if (tunedCircuit.coilHenries === null) {
    sheet.add(label([6, BUS + 26], 'loaded Q'));
    sheet.value('tuned circuit.loaded Q', [92, BUS + 26]);
  } else {
    sheet.value('tuned circuit.coil', [72, GRID + 38]);
    sheet.add(label([6, BUS + 26], 'Q'));
    sheet.value('tuned circuit.unloaded Q', [24, BUS + 26]);
    if (tunedCircuit.tap !== 1) {
      sheet.add(label([82, BUS + 26], 'tap'));
      sheet.value('tuned circuit.tap', [112, BUS + 26]);
    }
  }
}

function drawGrid(sheet: Sheet, { detector }: CircuitRecord): void {
  const left = 218;
  const grid = 314;
  sheet.add(capacitor([left, GRID], [grid, GRID]), wire([grid, GRID], [TUBE_X - 40, GRID]));
  sheet.box('gridCapacitor', left + 20, GRID - 24, 56, 48);
  sheet.value('detector.grid capacitor', [(left + grid) / 2, GRID + 42], 'middle');
  if (detector.leakPosition === 'across capacitor') {
    sheet.add(
      wire([left + 6, GRID], [left + 6, GRID - 48]),
      resistor([left + 6, GRID - 48], [grid - 6, GRID - 48]),
      wire([grid - 6, GRID - 48], [grid - 6, GRID]),
      joint([left + 6, GRID]),
      joint([grid - 6, GRID]),
    );
    sheet.value('detector.leak', [(left + grid) / 2, GRID - 68], 'middle');
    return;
  }
  sheet.add(joint([grid, GRID]));
  if (detector.leakReturnVolts === 0) {
    sheet.add(resistor([grid, GRID], [grid, BUS]), joint([grid, BUS]));
    sheet.value('detector.leak', [grid - 14, BUS - 40], 'end');
  } else {
    sheet.add(resistor([grid, GRID], [grid, BUS - 30]), terminal([grid, BUS - 26]));
    sheet.value('detector.leak', [grid - 14, BUS - 66], 'end');
    sheet.add(
      label([grid - 10, BUS - 20], `${detector.leakReturnVolts > 0 ? '+' : ''}${detector.leakReturnVolts} V`, 'end'),
    );
  }
}

function drawTube(sheet: Sheet, { tube, detector }: CircuitRecord): void {
  sheet.add(
    wire([TUBE_X, PLATE], [TUBE_X, GRID - 60]),
    triode([TUBE_X, GRID]),
    wire([TUBE_X - 18, GRID + 60], [TUBE_X - 18, BUS]),
    joint([TUBE_X - 18, BUS]),
    label([TUBE_X + 4, GRID + 64], tube.type),
  );
  if (detector.law !== 'tube') sheet.add(label([TUBE_X + 4, GRID + 84], `${detector.law} law`));
}

/** Everything to the right of the plate; returns where the drawing ends. */
function drawPlate(sheet: Sheet, circuit: CircuitRecord): number {
  const { plate } = circuit;
  let x = TUBE_X + 92;
  sheet.add(wire([TUBE_X, PLATE], [x, PLATE]), capacitor([x, PLATE], [x, BUS]), joint([x, PLATE]), joint([x, BUS]));
  sheet.box('plateBypass', x - 24, (PLATE + BUS) / 2 - 26, 48, 52);
  sheet.value('plate.bypass', [x + 20, (PLATE + BUS) / 2 - 18]);
  let loadX = TUBE_X;
  if (plate.carrierChoke) {
    const end = x + 110;
    sheet.add(
      coil([x, PLATE], [end, PLATE]),
      capacitor([end, PLATE], [end, BUS]),
      joint([end, PLATE]),
      joint([end, BUS]),
    );
    sheet.value('plate.carrier choke', [(x + end) / 2, PLATE - 20], 'middle');
    sheet.value('plate.second bypass', [end + 20, (PLATE + BUS) / 2 - 18]);
    x = end;
    loadX = end;
  } else sheet.add(joint([TUBE_X, PLATE]));
  const outputY = drawLoad(sheet, circuit, loadX);
  drawSupply(sheet, circuit, loadX);
  if (outputY === null) return x + 40;
  // from a transformer the output runs on above until it is clear of the bypass
  if (outputY !== PLATE) sheet.add(wire([loadX + 46, outputY], [Math.max(loadX + 46, x), outputY]));
  return drawOutput(sheet, circuit, outputY === PLATE ? x : Math.max(loadX + 46, x), outputY);
}

/** Returns the height at which the output leaves, null when the load itself is heard. */
function drawLoad(sheet: Sheet, { plate }: CircuitRecord, x: number): number | null {
  const from: Point = [x, PLATE];
  const to: Point = [x, TOP];
  const beside: Point = [x + 20, (PLATE + TOP) / 2 + 5];
  sheet.box('load', x - 24, TOP + 18, 48, PLATE - TOP - 36);
  switch (plate.load.kind) {
    case 'resistor':
      sheet.add(resistor(from, to));
      sheet.value('plate.load.resistance', beside);
      return PLATE;
    case 'choke':
      sheet.add(coil(from, to, -1), core(x - 14, (PLATE + TOP) / 2));
      sheet.value('plate.load.inductance', beside);
      return PLATE;
    case 'phones':
      sheet.add(phones(from, to));
      sheet.value('plate.load.dc resistance', [x + 28, (PLATE + TOP) / 2 - 8]);
      sheet.value('plate.load.inductance', [x + 28, (PLATE + TOP) / 2 + 22]);
      return null;
    case 'transformer': {
      const middle = (PLATE + TOP) / 2;
      const second = x + 46;
      sheet.add(
        coil(from, to, -1),
        core(x + 23, middle),
        coil([second, middle - 40], [second, middle + 34], -1),
        wire([second, middle + 34], [second, middle + 38]),
        chassis([second, middle + 38]),
      );
      sheet.value('plate.load.ratio', [x - 24, middle - 8], 'end');
      sheet.value('plate.load.primary inductance', [x - 24, middle + 22], 'end');
      return middle - 40;
    }
  }
}

function drawSupply(sheet: Sheet, { plate }: CircuitRecord, x: number): void {
  let end: Point = [x, TOP];
  if (plate.dropping) {
    const far: Point = [x + 120, TOP - 30];
    sheet.add(
      wire([x, TOP], [x, TOP - 30]),
      resistor([x, TOP - 30], far),
      joint([x, TOP - 30]),
      wire([x, TOP - 30], [x - 46, TOP - 30]),
      capacitor([x - 46, TOP - 30], [x - 46, TOP + 14]),
      chassis([x - 46, TOP + 14]),
    );
    sheet.value('plate.dropping resistor', [x + 60, TOP - 48], 'middle');
    sheet.value('plate.dropping capacitor', [x - 64, TOP - 2], 'end');
    end = far;
  } else {
    end = [x, TOP - 36];
    sheet.add(wire([x, TOP], end));
  }
  sheet.add(terminal(end), label([end[0] + 10, end[1] + 5], '+'));
  sheet.value('plate.supply', [end[0] + 26, end[1] + 5]);
}

function drawOutput(sheet: Sheet, { output }: CircuitRecord, from: number, y: number): number {
  let x = from + (output.couplingFarads === null ? 90 : 118);
  if (output.couplingFarads === null) sheet.add(wire([from, y], [x, y]));
  else {
    sheet.add(capacitor([from + 34, y], [x, y]), wire([from, y], [from + 34, y]));
    sheet.value('output.coupling', [(from + 34 + x) / 2, y - 24], 'middle');
  }
  if (output.matching) {
    const second = x + 46;
    sheet.add(
      wire([x, y], [x, GRID]),
      coil([x, GRID], [x, BUS], -1),
      core(x + 23, (GRID + BUS) / 2),
      coil([second, GRID], [second, BUS], -1),
      wire([second, GRID], [second, y]),
      joint([x, BUS]),
    );
    x = second;
  }
  const middle = (Math.max(y, PLATE) + BUS) / 2;
  if (output.loadOhms !== null) {
    sheet.add(joint([x, y]), wire([x, y], [x, PLATE]), resistor([x, PLATE], [x, BUS]), joint([x, BUS]));
    sheet.value('output.load resistance', [x + 14, middle - 26]);
  }
  if (output.phones) {
    sheet.add(wire([x, y], [x + 90, y], [x + 90, PLATE]), phones([x + 90, PLATE], [x + 90, BUS]));
    x += 90;
  } else if (output.loadFarads > 0 || output.loadOhms !== null) {
    sheet.add(
      wire([x, y], [x + 90, y], [x + 90, PLATE]),
      capacitor([x + 90, PLATE], [x + 90, BUS]),
      joint([x + 90, BUS]),
    );
    sheet.value('output.load capacitance', [x + 108, middle + 34]);
    x += 90;
  }
  sheet.add(wire([x, y], [x + 50, y]), terminal([x + 50, y]), terminal([x + 50, BUS]), joint([x, y]));
  return x + 46;
}
