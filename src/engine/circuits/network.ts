import { InputError } from '../errors.ts';

/** Node number of the reference, the cathode. */
export const CATHODE = -1;

/**
 * A linear network by element stamps, in the form  E·dz/dt + F·z = b − B·i,
 * z the node voltages against the cathode (V) followed by branch currents (A), i the currents drawn from port nodes.
 *
 * Elements are written one by one. Free nodes are numbered from 0 by `node()`; the cathode and points of fixed voltage
 * have numbers below 0, take no row, and what leads to them enters the drive b.
 */
export class Network {
  private readonly capacitors: [number, number, number][] = [];
  private readonly conductors: [number, number, number][] = [];
  private readonly inductors: [number, number, number, number][] = [];
  private readonly transformers: [number, number, number, number, number][] = [];
  private readonly fixedVolts: number[] = [0];
  /** Free node that a fixed voltage stands on, or the cathode. */
  private readonly fixedOn: number[] = [CATHODE];
  private readonly sources: [number, number][] = [];
  private nodes = 0;

  /** A new node; returns its number. */
  node(): number {
    return this.nodes++;
  }

  /** A point of fixed voltage against the cathode, such as the supply, or against a free node. */
  fixed(volts: number, on = CATHODE): number {
    this.fixedOn.push(on);
    return -this.fixedVolts.push(volts);
  }

  /** A voltage source, dead here, from b to a: its current is the last kind of unknown. Returns its number. */
  source(a: number, b: number): number {
    return this.sources.push([a, b]) - 1;
  }

  /** Place of a source's current among the unknowns, once everything is there. */
  sourceIndex(source: number): number {
    return this.nodes + this.inductors.length + this.transformers.length + source;
  }

  /** C (F) between two nodes; 0 is left out. */
  capacitor(a: number, b: number, farads: number): void {
    if (farads !== 0) this.capacitors.push([a, b, farads]);
  }

  /** R (ohm, above 0) between two nodes. */
  resistor(a: number, b: number, ohms: number): void {
    this.conductors.push([a, b, 1 / ohms]);
  }

  /** L (H) in series with R (ohm), 0 allowed for both, between two nodes; returns the branch whose current it is. */
  inductor(a: number, b: number, henries: number, ohms = 0): number {
    return this.inductors.push([a, b, henries, ohms]) - 1;
  }

  /** Place of a branch's current among the unknowns, once all nodes are there. */
  branchIndex(branch: number): number {
    return this.nodes + branch;
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
    const n = this.nodes + this.inductors.length + this.transformers.length + this.sources.length;
    if (this.nodes === 0) {
      throw new InputError({ code: 'empty-network', where: 'circuit', got: 'no node', expected: 'at least one node' });
    }
    const e = new Float64Array(n * n);
    const f = new Float64Array(n * n);
    const b = new Float64Array(n);
    const add = (m: Float64Array, row: number, col: number, value: number): void => {
      // what happens at a point of fixed voltage happens at the node it stands on
      const r = row >= 0 ? row : (this.fixedOn[-1 - row] as number);
      if (r < 0) return;
      if (col >= 0) m[r * n + col] = (m[r * n + col] as number) + value;
      else {
        const on = this.fixedOn[-1 - col] as number;
        if (on >= 0) m[r * n + on] = (m[r * n + on] as number) + value;
        // a fixed voltage has no rate of change, so it matters to F alone
        if (m === f) b[r] = (b[r] as number) - value * (this.fixedVolts[-1 - col] as number);
      }
    };
    const pair = (m: Float64Array, p: number, q: number, value: number): void => {
      add(m, p, p, value);
      add(m, q, q, value);
      add(m, p, q, -value);
      add(m, q, p, -value);
    };
    for (const [p, q, farads] of this.capacitors) pair(e, p, q, farads);
    for (const [p, q, siemens] of this.conductors) pair(f, p, q, siemens);
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
    for (const [p, q] of this.sources) {
      // current i leaves p through the source; v_p − v_q = 0
      add(f, p, row, 1);
      add(f, q, row, -1);
      add(f, row, p, 1);
      add(f, row, q, -1);
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
