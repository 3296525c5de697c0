import type { CircuitRecord } from '../results/result.ts';
import { drawCathode, drawDiode, drawFollower, drawPlateBendGrid } from './detector-drawings.ts';
import { BUS, type CostMark, GRID, PLATE, Sheet, TUBE_X } from './drawing-sheet.ts';
import { aerial, capacitor, chassis, coil, joint, label, resistor, terminal, triode, wire } from './drawing-symbols.ts';
import { drawPlate } from './plate-drawing.ts';

/**
 * The detector as a drawing in standard symbols, signal from left to right, supply on top. Every value is a control; the
 * part that costs most is framed.
 */
export function circuitDrawing(circuit: CircuitRecord, title: string, mark: CostMark | null): string {
  const sheet = new Sheet(circuit);
  drawTunedCircuit(sheet, circuit);
  const right = drawDetector(sheet, circuit);
  sheet.add(
    wire([56, BUS], [right, BUS]),
    wire([TUBE_X - 18, BUS], [TUBE_X - 18, BUS + 12]),
    chassis([TUBE_X - 18, BUS + 12]),
  );
  return sheet.svg(right + 96, title, mark);
}

/** Everything behind the tuned circuit; returns where it ends. */
function drawDetector(sheet: Sheet, circuit: CircuitRecord): number {
  switch (circuit.detector.kind) {
    case 'diode':
    case 'crystal':
      return drawDiode(sheet, circuit);
    case 'infinite impedance':
      return drawFollower(sheet, circuit);
    case 'plate bend':
      drawPlateBendGrid(sheet, circuit);
      drawTube(sheet, circuit);
      drawCathode(sheet);
      return drawPlate(sheet, circuit);
    default:
      drawGrid(sheet, circuit);
      drawTube(sheet, circuit);
      sheet.add(wire([TUBE_X - 18, GRID + 60], [TUBE_X - 18, BUS]), joint([TUBE_X - 18, BUS]));
      return drawPlate(sheet, circuit);
  }
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
    label([TUBE_X + 4, GRID + 64], tube.type),
  );
  if (detector.law !== 'tube') sheet.add(label([TUBE_X + 4, GRID + 84], `${detector.law} law`));
}
