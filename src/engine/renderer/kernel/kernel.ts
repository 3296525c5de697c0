import type { RestPoint } from '../../circuits/rest-point.ts';
import type { CycleTable } from '../../tubes/cycle-table.ts';
import type { FilterBank } from '../resampling.ts';
import type { StageStepper } from '../stage-stepper.ts';
import { ENVELOPE_SHARE } from '../tank-step.ts';
import { bytesFromBase64 } from './base64.ts';
import { KERNEL_BASE64 } from './code.ts';
import * as L from './layout.ts';

interface Exports {
  block(
    frames: number,
    unknowns: number,
    rows: number,
    output: number,
    steps: number,
    half: number,
    phases: number,
    lanes: number,
    rise: number,
    fall: number,
    at: number,
    tuned: boolean,
    middle: number,
    quadrature: number,
  ): number;
}

/** What the kernel is loaded with: everything the plain renderer worked out. */
export interface KernelSetup {
  readonly rest: RestPoint;
  readonly stepper: StageStepper;
  readonly grid: CycleTable;
  readonly cathode: CycleTable;
  readonly envelopeWeights: Float64Array;
  readonly tuned: boolean;
  readonly filters: FilterBank;
  readonly restVolts: number;
}

/** Takes stretches of a memory one after another, each on an 8-byte boundary. */
class Shelf {
  private next: number;

  constructor(from: number) {
    this.next = from;
  }

  take(bytes: number): number {
    const at = this.next;
    this.next += Math.ceil(bytes / 8) * 8;
    return at;
  }

  get used(): number {
    return this.next;
  }
}

function tableBytes(table: CycleTable): number {
  const { crest, peak, cells } = table.parts;
  const axis = (k: { knots: Float64Array; inverse: Float64Array; index: Int32Array }): number =>
    8 * (k.knots.length + k.inverse.length) + 4 * k.index.length + 24;
  return axis(crest) + axis(peak) + 8 * cells.length;
}

/**
 * The renderer's loop as WebAssembly: the same arithmetic as the plain stepper, in one memory of its own. It exists
 * for speed only; tests hold it to the plain stepper's samples.
 */
export class Kernel {
  private readonly memory: WebAssembly.Memory;
  private readonly numbers: Float64Array;
  private readonly run: Exports['block'];
  private readonly setup: KernelSetup;
  private readonly addresses: {
    phases: number;
    rows: number;
    rise: number;
    fall: number;
    other: number;
    windows: number;
  };
  private place = 0;
  /** Rows of the state's matrix: unknowns and the output at half a step, even. */
  private readonly rows: number;

  constructor(setup: KernelSetup) {
    this.setup = setup;
    this.rows = 2 * Math.ceil((setup.rest.audio.system.size + 1) / 2);
    const { filters, grid, cathode, stepper } = setup;
    const taps = 2 * filters.half;
    const windows = 8 * 2 * taps * (2 * filters.steps + 2);
    const shelf = new Shelf(8 * L.FREE);
    const phases = shelf.take(8 * filters.phases.length);
    const rows = shelf.take(8 * filters.rows.length);
    const rise = shelf.take(windows);
    const fall = rise + 8 * 2 * taps;
    const other = fall + 8 * 2 * taps * 2 * filters.steps;
    const tables = shelf.take(tableBytes(grid) + tableBytes(cathode));
    this.addresses = { phases, rows, rise, fall, other, windows };
    this.memory = new WebAssembly.Memory({ initial: Math.ceil(shelf.used / 65536) + 1 });
    this.numbers = new Float64Array(this.memory.buffer);
    this.numbers.set(filters.phases, phases / 8);
    this.numbers.set(filters.rows, rows / 8);
    const shelves = new Shelf(tables);
    this.putTable(L.GRID_TABLE, grid, shelves);
    this.putTable(L.TUBE_TABLE, cathode, shelves);
    this.putConstants();
    const module = new WebAssembly.Module(bytesFromBase64(KERNEL_BASE64));
    const instance = new WebAssembly.Instance(module, { env: { memory: this.memory } });
    this.run = (instance.exports as unknown as Exports).block;
    stepper.reset();
    this.reset();
  }

  private putConstants(): void {
    const { numbers: m } = this;
    const { rest, stepper, envelopeWeights, restVolts } = this.setup;
    const { plan, limits, weights, laws } = stepper.internals();
    const n = plan.size;
    const rows = this.rows;
    m[L.PER_MU] = 1 / laws.mu;
    m[L.PHI] = laws.phi;
    m[L.REST_PEAK] = rest.tuned.carrierPeakVolts;
    m[L.REST_OUTPUT] = restVolts;
    m[L.WEIGHT] = rest.audio.output.weight;
    m.set(rest.path.numbers, L.PATH);
    m.set(limits, L.STALE);
    m[L.REST_GRID] = rest.gridVolts;
    m[L.REST_PLATE] = rest.plateVolts;
    m.set(weights, L.FORECAST);
    m.set(plan.portConstant, L.PORT_CONSTANT);
    m.set(byColumns(plan.portFromCurrent, 6, 6), L.PORT_FROM_CURRENT);
    m.set(envelopeWeights, L.ENVELOPE);
    const { tank } = stepper;
    if (tank) {
      const { input, perSiemensSecond, most } = tank;
      m.set([perSiemensSecond, input.re, input.im, most, ENVELOPE_SHARE, 1], L.TANK);
      m.set(tank.weights, L.TANK_WEIGHTS);
    }
    m.set(byColumns(plan.portFromState, 6, n), L.PORT_FROM_STATE);
    m.set(plan.stateConstant, L.CONSTANT);
    m[L.CONSTANT + n] = plan.halfConstant;
    // unknowns, then the output at half a step; columns of the state, then of the currents drawn
    const fromState = Float64Array.of(...plan.stateFromState, ...plan.halfFromState);
    const fromCurrent = Float64Array.of(...plan.stateFromCurrent, ...plan.halfFromCurrent).map((value) => -value);
    m.set(byColumns(fromState, n + 1, n, rows), L.FROM_ALL);
    m.set(byColumns(fromCurrent, n + 1, 6, rows), L.FROM_ALL + n * rows);
  }

  private putTable(head: number, table: CycleTable, shelf: Shelf): void {
    const { numbers: m } = this;
    const { crest, peak, cells } = table.parts;
    const putNumbers = (values: Float64Array): number => {
      const at = shelf.take(8 * values.length);
      m.set(values, at / 8);
      return at;
    };
    const putIndex = (values: Int32Array): number => {
      const at = shelf.take(4 * values.length);
      new Int32Array(this.memory.buffer).set(values, at / 4);
      return at;
    };
    const last = crest.knots.length - 1;
    m[head] = crest.knots[0] as number;
    m[head + 1] = crest.knots[last] as number;
    m[head + 2] = peak.knots[peak.knots.length - 1] as number;
    m[head + 3] = crest.perVolt;
    m[head + 4] = peak.perVolt;
    // counts and addresses stand as whole numbers, so that the loop converts nothing
    const whole = new Int32Array(this.memory.buffer);
    const places = [
      last - 1,
      peak.knots.length - 1,
      putNumbers(crest.knots),
      putNumbers(crest.inverse),
      putIndex(crest.index),
      putNumbers(peak.knots),
      putNumbers(peak.inverse),
      putIndex(peak.index),
      putNumbers(cells),
    ];
    places.forEach((place, k) => {
      whole[2 * (head + 5 + k)] = place;
    });
  }

  /** Back to the rest point. */
  reset(): void {
    const { numbers: m } = this;
    const { stepper } = this.setup;
    const { past } = stepper.internals();
    m.fill(0, this.addresses.rise / 8, (this.addresses.rise + this.addresses.windows) / 8);
    m.set(stepper.state, L.STATE);
    m.set(past, L.PAST);
    m.fill(Number.POSITIVE_INFINITY, L.KEPT, L.KEPT + 4);
    m.fill(0, L.COUNTS, L.COUNTS + 4);
    m.fill(0, L.PULL_PAST, L.PULL_PAST + 8);
    m[L.STEEP] = 0;
    m[L.ENVELOPE_STATE] = 1;
    m[L.ENVELOPE_STATE + 1] = 0;
    m[L.ENVELOPE_STATE + 2] = 1;
    m[L.ENVELOPE_STATE + 3] = 0;
    this.place = 0;
  }

  /** As `DetectorRenderer.process`. */
  process(
    input: Float64Array | Float32Array,
    output: Float64Array | Float32Array,
    frames: number,
    quadrature: Float64Array | null = null,
  ): void {
    const { numbers: m, addresses: a, setup } = this;
    const { filters, rest, tuned } = setup;
    for (let from = 0; from < frames; from += L.BLOCK) {
      const count = Math.min(L.BLOCK, frames - from);
      for (let n = 0; n < count; n++) m[L.INPUT + n] = input[from + n] as number;
      if (quadrature) for (let n = 0; n < count; n++) m[L.QUADRATURE + n] = quadrature[from + n] as number;
      this.place = this.run(
        count,
        rest.audio.system.size,
        this.rows,
        rest.audio.output.index,
        filters.steps,
        filters.half,
        a.phases,
        a.rows,
        a.rise,
        a.fall,
        this.place,
        tuned,
        filters.middle,
        quadrature ? a.other : 0,
      );
      for (let n = 0; n < count; n++) output[from + n] = m[L.OUTPUT + n] as number;
    }
  }

  /** Newton passes, unsettled steps, steps and quick steps since reset. */
  counts(): { passes: number; unsettled: number; steps: number; quick: number } {
    const at = (k: number): number => this.numbers[L.COUNTS + k] as number;
    return { passes: at(0), unsettled: at(1), steps: at(2), quick: at(3) };
  }
}

/** A row-major matrix column by column, each column padded to `height`. */
function byColumns(matrix: Float64Array, rows: number, columns: number, height = rows): Float64Array {
  const out = new Float64Array(columns * height);
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) out[c * height + r] = matrix[r * columns + c] as number;
  }
  return out;
}
