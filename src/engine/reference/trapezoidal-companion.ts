import { solveDense } from './dense-inverse.ts';
import type { LinearNetwork, Port } from './linear-network.ts';

/**
 * The linear network under the trapezoidal rule at one fixed step, with everything but the two ports eliminated.
 *
 * With q = C·x the charges (and fluxes), the rule keeps one number per row, w = (2/h)·q + dq/dt:
 *
 *   ((2/h)·C + G)·x = w + sources − port currents,     w' = (4/h)·q − w
 *
 * so the whole step is, with i the port currents and e the drive,
 *
 *   w' = step·w + stepHeld + stepDrive·e − stepPort·i,   v = port·w + portHeld + portDrive·e − portOhms·i
 */
export interface Companion {
  readonly states: number;
  readonly step: Float64Array;
  readonly stepHeld: Float64Array;
  readonly stepDrive: Float64Array;
  /** states × 2, row by row. */
  readonly stepPort: Float64Array;
  /** 2 × states. */
  readonly port: Float64Array;
  readonly portHeld: Float64Array;
  readonly portDrive: Float64Array;
  /** 2 × 2, ohms. */
  readonly portOhms: Float64Array;
  /** How node voltages follow: one row per node asked for. */
  readonly observe: (node: number) => Observation;
  /** Change of the state when the cycle's mean voltages of free nodes shift: pairs of node and volts. */
  readonly shift: (node: number, volts: number) => Float64Array;
  /** State in which every charge stands still at the given node voltages (free nodes absent from it at 0). */
  readonly restState: (volts: ReadonlyMap<number, number>, driveVolts: number) => Float64Array;
  /** A typical size of each state for one volt or one ampere, used for finite differences. */
  readonly scale: Float64Array;
}

/** v = row·w + held + drive·e − port·i */
export interface Observation {
  readonly row: Float64Array;
  readonly held: number;
  readonly drive: number;
  readonly port: Float64Array;
}

/**
 * Reduces a network to its ports. `stepSeconds` above 0; exactly two ports. Throws RangeError when a node hangs free.
 */
export function makeCompanion(network: LinearNetwork, ports: readonly [Port, Port], stepSeconds: number): Companion {
  const { nodes, elements } = network;
  const column = new Int32Array(nodes.length).fill(-1);
  let free = 0;
  nodes.forEach((node, k) => {
    if (node.kind === 'free') column[k] = free++;
  });
  const unknowns = free + elements.filter((e) => e.kind === 'inductor' || e.kind === 'transformer').length;
  // Columns after the unknowns: held sources (their sum, as one column of 1) and the drive.
  const width = unknowns + 2;
  const G = new Float64Array(unknowns * width);
  const C = new Float64Array(unknowns * width);
  const put = (m: Float64Array, row: number, node: number, value: number): void => {
    const kind = nodes[node]!;
    const base = row * width;
    if (kind.kind === 'free') m[base + column[node]!]! += value;
    else if (kind.kind === 'held') m[base + unknowns]! += value * kind.volts;
    else {
      m[base + unknowns]! += value * kind.offsetVolts;
      m[base + unknowns + 1]! += value;
    }
  };
  const twoPole = (m: Float64Array, a: number, b: number, y: number): void => {
    for (const [from, to] of [
      [a, b],
      [b, a],
    ] as const) {
      const row = column[from]!;
      if (row < 0) continue;
      put(m, row, from, y);
      put(m, row, to, -y);
    }
  };
  const current = (node: number, branch: number, value: number): void => {
    const row = column[node]!;
    if (row >= 0) G[row * width + branch]! += value;
  };
  let branch = free;
  for (const e of elements) {
    if (e.kind === 'resistor') twoPole(G, e.a, e.b, 1 / e.value);
    else if (e.kind === 'capacitor') twoPole(C, e.a, e.b, e.value);
    else if (e.kind === 'inductor') {
      current(e.a, branch, 1);
      current(e.b, branch, -1);
      put(G, branch, e.a, 1);
      put(G, branch, e.b, -1);
      C[branch * width + branch]! -= e.value;
      branch++;
    } else {
      current(e.c, branch, 1);
      current(e.d, branch, -1);
      current(e.a, branch, -e.ratio);
      current(e.b, branch, e.ratio);
      put(G, branch, e.c, 1);
      put(G, branch, e.d, -1);
      put(G, branch, e.a, -e.ratio);
      put(G, branch, e.b, e.ratio);
      branch++;
    }
  }
  const charged: number[] = [];
  for (let r = 0; r < unknowns; r++) {
    if (C.subarray(r * width, (r + 1) * width).some((c) => c !== 0)) charged.push(r);
  }
  const n = charged.length;
  const K = new Float64Array(unknowns * unknowns);
  // Right-hand sides: states, held, drive, two ports.
  const sides = n + 4;
  const rhs = new Float64Array(unknowns * sides);
  for (let r = 0; r < unknowns; r++) {
    for (let c = 0; c < unknowns; c++) K[r * unknowns + c] = (2 / stepSeconds) * C[r * width + c]! + G[r * width + c]!;
    for (let k = 0; k < 2; k++) {
      const c = unknowns + k;
      rhs[r * sides + n + k] = -((2 / stepSeconds) * C[r * width + c]! + G[r * width + c]!);
    }
  }
  charged.forEach((r, k) => {
    rhs[r * sides + k] = 1;
  });
  if (network.driveInto !== null) rhs[column[network.driveInto]! * sides + n + 1]! += 1;
  ports.forEach((port, k) => {
    if (column[port.a]! >= 0) rhs[column[port.a]! * sides + n + 2 + k]! -= 1;
    if (column[port.b]! >= 0) rhs[column[port.b]! * sides + n + 2 + k]! += 1;
  });
  const X = solveDense(K, rhs, unknowns);

  const nodeRow = (node: number): Float64Array => {
    const kind = nodes[node]!;
    if (kind.kind === 'free') return X.slice(column[node]! * sides, (column[node]! + 1) * sides);
    const row = new Float64Array(sides);
    row[n] = kind.kind === 'held' ? kind.volts : kind.offsetVolts;
    if (kind.kind === 'drive') row[n + 1] = 1;
    return row;
  };

  const step = new Float64Array(n * n);
  const stepHeld = new Float64Array(n);
  const stepDrive = new Float64Array(n);
  const stepPort = new Float64Array(n * 2);
  const scale = new Float64Array(n);
  const four = 4 / stepSeconds;
  charged.forEach((r, k) => {
    const total = new Float64Array(sides);
    for (let c = 0; c < unknowns; c++) {
      const q = C[r * width + c]!;
      if (q !== 0) for (let s = 0; s < sides; s++) total[s]! += four * q * X[c * sides + s]!;
    }
    total[n]! += four * C[r * width + unknowns]!;
    total[n + 1]! += four * C[r * width + unknowns + 1]!;
    total[k]! -= 1;
    step.set(total.subarray(0, n), k * n);
    stepHeld[k] = total[n]!;
    stepDrive[k] = total[n + 1]!;
    stepPort[2 * k] = -total[n + 2]!;
    stepPort[2 * k + 1] = -total[n + 3]!;
    scale[k] = (2 / stepSeconds) * Math.abs(C[r * width + r]!);
  });

  const port = new Float64Array(2 * n);
  const portHeld = new Float64Array(2);
  const portDrive = new Float64Array(2);
  const portOhms = new Float64Array(4);
  ports.forEach((p, k) => {
    const a = nodeRow(p.a);
    const b = nodeRow(p.b);
    for (let s = 0; s < n; s++) port[k * n + s] = a[s]! - b[s]!;
    portHeld[k] = a[n]! - b[n]!;
    portDrive[k] = a[n + 1]! - b[n + 1]!;
    portOhms[2 * k] = -(a[n + 2]! - b[n + 2]!);
    portOhms[2 * k + 1] = -(a[n + 3]! - b[n + 3]!);
  });

  return {
    states: n,
    step,
    stepHeld,
    stepDrive,
    stepPort,
    port,
    portHeld,
    portDrive,
    portOhms,
    scale,
    observe(node) {
      const row = nodeRow(node);
      return {
        row: row.slice(0, n),
        held: row[n]!,
        drive: row[n + 1]!,
        port: new Float64Array([-row[n + 2]!, -row[n + 3]!]),
      };
    },
    shift(node, volts) {
      const out = new Float64Array(n);
      const c = column[node]!;
      if (c >= 0)
        charged.forEach((r, k) => {
          out[k] = (2 / stepSeconds) * C[r * width + c]! * volts;
        });
      return out;
    },
    restState(volts, driveVolts) {
      const out = new Float64Array(n);
      charged.forEach((r, k) => {
        let q = C[r * width + unknowns]! + C[r * width + unknowns + 1]! * driveVolts;
        for (const [node, v] of volts) if (column[node]! >= 0) q += C[r * width + column[node]!]! * v;
        out[k] = (2 / stepSeconds) * q;
      });
      return out;
    },
  };
}
