/**
 * The linear part of a circuit as a list of elements, for the carrier-cycle reference.
 *
 * A node is a number handed out by the network; cathode potential is `network.cathode`. A node may be free, or held
 * at a constant voltage, or held at the drive voltage that changes from step to step.
 */
export type NodeKind =
  | { readonly kind: 'free' }
  | { readonly kind: 'held'; readonly volts: number }
  | { readonly kind: 'drive'; readonly offsetVolts: number };

export type Element =
  | { readonly kind: 'resistor'; readonly a: number; readonly b: number; readonly value: number }
  | { readonly kind: 'capacitor'; readonly a: number; readonly b: number; readonly value: number }
  | { readonly kind: 'inductor'; readonly a: number; readonly b: number; readonly value: number }
  | {
      readonly kind: 'transformer';
      readonly a: number;
      readonly b: number;
      readonly c: number;
      readonly d: number;
      readonly ratio: number;
    };

/** A pair of nodes between which a nonlinear current flows, from `a` to `b`. */
export interface Port {
  readonly a: number;
  readonly b: number;
}

export interface LinearNetwork {
  readonly nodes: readonly NodeKind[];
  readonly elements: readonly Element[];
  readonly cathode: number;
  /** Free node into which the drive current flows, or null when the drive is a voltage. */
  readonly driveInto: number | null;
  /** Adds a free node. */
  free(): number;
  /** Adds a node held at `volts` against the cathode. */
  held(volts: number): number;
  /** Adds a node held at the drive voltage plus `offsetVolts`. */
  drive(offsetVolts: number): number;
  /** R in ohms, above 0; an infinite one is left out. */
  resistor(a: number, b: number, ohms: number): void;
  /** C in farads; 0 is left out. */
  capacitor(a: number, b: number, farads: number): void;
  /** L in henries, above 0. */
  inductor(a: number, b: number, henries: number): void;
  /** Ideal transformer: volts of (c, d) = ratio · volts of (a, b). */
  transformer(a: number, b: number, c: number, d: number, ratio: number): void;
  /** Sends the drive, as a current in amperes, into a free node. */
  driveCurrent(into: number): void;
}

/** An empty network with its cathode node. */
export function createNetwork(): LinearNetwork {
  const nodes: NodeKind[] = [{ kind: 'held', volts: 0 }];
  const elements: Element[] = [];
  let driveInto: number | null = null;
  const add = (kind: NodeKind): number => nodes.push(kind) - 1;
  return {
    nodes,
    elements,
    cathode: 0,
    get driveInto() {
      return driveInto;
    },
    free: () => add({ kind: 'free' }),
    held: (volts) => add({ kind: 'held', volts }),
    drive: (offsetVolts) => add({ kind: 'drive', offsetVolts }),
    resistor(a, b, ohms) {
      if (ohms !== Number.POSITIVE_INFINITY) elements.push({ kind: 'resistor', a, b, value: ohms });
    },
    capacitor(a, b, farads) {
      if (farads !== 0) elements.push({ kind: 'capacitor', a, b, value: farads });
    },
    inductor(a, b, henries) {
      elements.push({ kind: 'inductor', a, b, value: henries });
    },
    transformer(a, b, c, d, ratio) {
      elements.push({ kind: 'transformer', a, b, c, d, ratio });
    },
    driveCurrent(into) {
      driveInto = into;
    },
  };
}
