import { InputError } from '../errors.ts';

/** Node number of the reference, the cathode. */
export const CATHODE = -1;

/**
 * A linear network by element stamps, in the form  E·dz/dt + F·z = b − B·i,
 * z the node voltages against the cathode (V) followed by branch currents (A), i the currents drawn from port nodes.
 *
 * Elements are written one by one; fixed voltages (supply, returns) enter as Norton equivalents of the element that
 * leads to them, so that no source row is needed. Nodes are numbered from 0 by `node()`.
 */
export class Network {
  private readonly capacitors: [number, number, number][] = [];
  private readonly conductors: [number, number, number][] = [];
  private readonly injected: [number, number][] = [];
  private readonly inductors: [number, number, number, number][] = [];
  private readonly transformers: [number, number, number, number, number][] = [];
  private nodes = 0;

  /** A new node; returns its number. */
  node(): number {
    return this.nodes++;
  }

  /** C (F) between two nodes; the constant part of a fixed far end does not matter to a capacitor. */
  capacitor(a: number, b: number, farads: number): void {
    this.capacitors.push([a, b, farads]);
  }

  /** R (ohm, above 0) between two nodes. */
  resistor(a: number, b: number, ohms: number): void {
    this.conductors.push([a, b, 1 / ohms]);
  }

  /** R (ohm, above 0) from a node to a fixed voltage. */
  resistorTo(a: number, volts: number, ohms: number): void {
    this.conductors.push([a, CATHODE, 1 / ohms]);
    this.injected.push([a, volts / ohms]);
  }

  /** L (H) in series with R (ohm, 0 allowed) between two nodes, as one branch. */
  inductor(a: number, b: number, henries: number, ohms = 0): void {
    this.inductors.push([a, b, henries, ohms]);
  }

  /** Ideal transformer: v(c,d) = ratio · v(a,b); its branch current is that of the second winding. */
  transformer(a: number, b: number, c: number, d: number, ratio: number): void {
    this.transformers.push([a, b, c, d, ratio]);
  }

  /**
   * The matrices, row-major n × n, and the constant drive of length n.
   * Raises InputError `empty-network` when there is no node.
   */
  assemble(): LinearSystem {
    const n = this.nodes + this.inductors.length + this.transformers.length;
    if (this.nodes === 0) {
      throw new InputError({ code: 'empty-network', where: 'circuit', got: 'no node', expected: 'at least one node' });
    }
    const e = new Float64Array(n * n);
    const f = new Float64Array(n * n);
    const b = new Float64Array(n);
    const add = (m: Float64Array, row: number, col: number, value: number): void => {
      if (row >= 0 && col >= 0) m[row * n + col] = (m[row * n + col] as number) + value;
    };
    const pair = (m: Float64Array, p: number, q: number, value: number): void => {
      add(m, p, p, value);
      add(m, q, q, value);
      add(m, p, q, -value);
      add(m, q, p, -value);
    };
    for (const [p, q, farads] of this.capacitors) pair(e, p, q, farads);
    for (const [p, q, siemens] of this.conductors) pair(f, p, q, siemens);
    for (const [p, amps] of this.injected) b[p] = (b[p] as number) + amps;
    let row = this.nodes;
    for (const [p, q, henries, ohms] of this.inductors) {
      // branch current leaves p; L·di/dt + R·i − (v_p − v_q) = 0
      add(f, p, row, 1);
      add(f, q, row, -1);
      add(e, row, row, henries);
      add(f, row, row, ohms);
      add(f, row, p, -1);
      add(f, row, q, 1);
      row++;
    }
    for (const [p, q, r, s, ratio] of this.transformers) {
      // current i leaves r through the second winding, ratio·i enters at p
      add(f, r, row, 1);
      add(f, s, row, -1);
      add(f, p, row, -ratio);
      add(f, q, row, ratio);
      add(f, row, r, 1);
      add(f, row, s, -1);
      add(f, row, p, -ratio);
      add(f, row, q, ratio);
      row++;
    }
    return { size: n, storage: e, conductance: f, drive: b };
  }
}

/** E (`storage`), F (`conductance`), row-major size × size, and b (`drive`). */
export interface LinearSystem {
  readonly size: number;
  readonly storage: Float64Array;
  readonly conductance: Float64Array;
  readonly drive: Float64Array;
}
