import type { CircuitRecord } from '../results/result.ts';
import { BUS, GRID, type Sheet, TOP, TUBE_X } from './drawing-sheet.ts';
import {
  battery,
  capacitor,
  chassis,
  diode,
  joint,
  label,
  type Point,
  resistor,
  terminal,
  triode,
  wire,
} from './drawing-symbols.ts';
import { valueAt } from './part-values.ts';
import { drawOutput } from './plate-drawing.ts';

/** Where the cathode's lead leaves the tube. */
const CATHODE: Point = [TUBE_X - 18, GRID + 60];

/** The coil straight to the grid, with a bias battery where there is one. */
export function drawPlateBendGrid(sheet: Sheet, circuit: CircuitRecord): void {
  const grid: Point = [TUBE_X - 40, GRID];
  if (valueAt(circuit, ['detector', 'biasVolts']) === 0) {
    sheet.add(wire([218, GRID], grid));
    return;
  }
  sheet.add(battery([218, GRID], [300, GRID]), wire([300, GRID], grid));
  sheet.value('detector.bias', [259, GRID + 36], 'middle');
}

/** What stands in the cathode lead. */
export function drawCathode(sheet: Sheet): void {
  const [x, y] = CATHODE;
  sheet.add(joint([x, BUS]));
  if (!sheet.has('detector.cathode resistor')) {
    sheet.add(wire([x, y], [x, BUS]));
    return;
  }
  sheet.add(
    resistor([x, y], [x, BUS]),
    joint([x, y]),
    wire([x, y], [x - 46, y]),
    capacitor([x - 46, y], [x - 46, BUS]),
    joint([x - 46, BUS]),
  );
  sheet.value('detector.cathode resistor', [x + 16, BUS - 22]);
  sheet.value('detector.cathode capacitor', [x - 64, BUS - 14], 'end');
}

/** The tube as a follower: plate at the supply, the sound from its cathode. Returns where the drawing ends. */
export function drawFollower(sheet: Sheet, circuit: CircuitRecord): number {
  const [x, y] = CATHODE;
  const top: Point = [TUBE_X, TOP];
  sheet.add(
    wire([218, GRID], [TUBE_X - 40, GRID]),
    triode([TUBE_X, GRID]),
    wire([TUBE_X, GRID - 60], top),
    label([TUBE_X + 48, GRID + 6], circuit.tube.type),
    joint(top),
    wire(top, [TUBE_X - 46, TOP]),
    capacitor([TUBE_X - 46, TOP], [TUBE_X - 46, TOP + 44]),
    chassis([TUBE_X - 46, TOP + 44]),
  );
  drawCathode(sheet);
  const end: Point = [TUBE_X + 120, TOP];
  if (sheet.has('plate.dropping resistor')) {
    sheet.add(resistor(top, end));
    sheet.value('plate.dropping resistor', [TUBE_X + 60, TOP - 18], 'middle');
    sheet.value('plate.dropping capacitor', [TUBE_X - 64, TOP + 28], 'end');
  } else {
    sheet.add(wire(top, end));
    sheet.value('plate.bypass', [TUBE_X - 64, TOP + 28], 'end');
  }
  sheet.add(terminal(end), label([end[0] + 10, end[1] + 5], '+'));
  sheet.value('plate.supply', [end[0] + 26, end[1] + 5]);
  sheet.add(wire([x, y], [TUBE_X + 70, y]));
  sheet.box('plateBypass', x - 66, y + 6, 40, BUS - y - 12);
  return drawOutput(sheet, circuit, TUBE_X + 70, y);
}

/** A diode or crystal with its load, filter and what it feeds. Returns where the drawing ends. */
export function drawDiode(sheet: Sheet, circuit: CircuitRecord): number {
  let x = 330;
  sheet.add(diode([218, GRID], [x - 20, GRID]), wire([x - 20, GRID], [x, GRID]));
  sheet.add(label([264, GRID - 26], circuit.detector.kind, 'middle'));
  if (sheet.has('detector.diode load')) {
    sheet.add(resistor([x, GRID], [x, BUS]), joint([x, GRID]), joint([x, BUS]));
    sheet.value('detector.diode load', [x - 14, (GRID + BUS) / 2 + 40], 'end');
  }
  x += 64;
  sheet.add(wire([x - 64, GRID], [x, GRID]), capacitor([x, GRID], [x, BUS]), joint([x, GRID]), joint([x, BUS]));
  sheet.box('plateBypass', x - 22, (GRID + BUS) / 2 - 24, 44, 48);
  sheet.value('detector.diode bypass', [x + 18, (GRID + BUS) / 2 - 14]);
  if (sheet.has('detector.filter resistor')) {
    const end = x + 120;
    sheet.add(
      resistor([x, GRID], [end, GRID]),
      capacitor([end, GRID], [end, BUS]),
      joint([end, GRID]),
      joint([end, BUS]),
    );
    sheet.value('detector.filter resistor', [(x + end) / 2, GRID - 20], 'middle');
    sheet.value('detector.filter capacitor', [end + 18, (GRID + BUS) / 2 - 14]);
    x = end;
  }
  return drawOutput(sheet, circuit, x, GRID);
}
