import type { CarrierPorts } from './carrier-path.ts';
import { type Complex, complex, scaled } from './complex.ts';
import { solveComplex } from './dense-solve.ts';
import type { Network } from './network.ts';

/**
 * Works out what a network does at the carrier: its answers to one volt from the source at the tuned circuit, and to one
 * ampere drawn at each of the tube's ports.
 *
 * @param source  the network's source, at the tuned circuit's tap
 * @param grid    node of the grid, the cathode being the network's reference
 */
export function portsAt(network: Network, source: number, grid: number, plate: number, hertz: number): CarrierPorts {
  const system = network.assemble();
  const n = system.size;
  const row = network.sourceIndex(source);
  const im = system.storage.map((value) => value * 2 * Math.PI * hertz);
  const answers = (at: number, value: number): { grid: Complex; plate: Complex; source: Complex } => {
    const x = new Float64Array(2 * n);
    x[at] = value;
    solveComplex(system.conductance, im, n, x);
    const read = (k: number): Complex => complex(x[k] as number, x[n + k] as number);
    // the source's branch current flows into it, the stage draws the opposite
    return { grid: read(grid), plate: read(plate), source: scaled(read(row), -1) };
  };
  const drive = answers(row, 1);
  const byGrid = answers(grid, -1);
  const byPlate = answers(plate, -1);
  const minus = (value: Complex): Complex => scaled(value, -1);
  return {
    a1: drive.grid,
    a2: drive.plate,
    z11: minus(byGrid.grid),
    z12: minus(byPlate.grid),
    z21: minus(byGrid.plate),
    z22: minus(byPlate.plate),
    y: drive.source,
    b1: byGrid.source,
    b2: byPlate.source,
  };
}
