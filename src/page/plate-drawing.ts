import type { CircuitRecord } from '../results/result.ts';
import { BUS, GRID, PLATE, type Sheet, TOP, TUBE_X } from './drawing-sheet.ts';
import {
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
  wire,
} from './drawing-symbols.ts';

/** Everything to the right of the plate; returns where the drawing ends. */
export function drawPlate(sheet: Sheet, circuit: CircuitRecord): number {
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

export function drawOutput(sheet: Sheet, { output }: CircuitRecord, from: number, y: number): number {
  let x = from + (output.couplingFarads === null ? 112 : 118);
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
  const below = Math.max(y, PLATE);
  const middle = (below + BUS) / 2;
  const short = y > PLATE && BUS - y < 100;
  if (output.loadOhms !== null) {
    sheet.add(joint([x, y]), wire([x, y], [x, below]), resistor([x, below], [x, BUS]), joint([x, BUS]));
    sheet.value('output.load resistance', [x + 14, short ? middle + 4 : middle - 26]);
  }
  if (output.phones) {
    sheet.add(wire([x, y], [x + 90, y], [x + 90, below]), phones([x + 90, below], [x + 90, BUS]));
    x += 90;
  } else if (output.loadFarads > 0 || output.loadOhms !== null) {
    sheet.add(
      wire([x, y], [x + 90, y], [x + 90, below]),
      capacitor([x + 90, below], [x + 90, BUS]),
      joint([x + 90, BUS]),
    );
    sheet.value('output.load capacitance', [x + 108, short ? middle - 8 : middle + 34]);
    x += 90;
  }
  sheet.add(wire([x, y], [x + 50, y]), terminal([x + 50, y]), terminal([x + 50, BUS]), joint([x, y]));
  return x + 46;
}
