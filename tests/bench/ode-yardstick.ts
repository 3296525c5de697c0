import { createRequire } from 'node:module';
import { solveReal } from '../../src/engine/circuits/dense-solve.ts';
import type { RestPoint } from '../../src/engine/circuits/rest-point.ts';
import { emptyCurrents, Stage } from '../../src/engine/circuits/stage-currents.ts';
import { harmonics } from '../../src/engine/measure/harmonics.ts';
import { referenceSource } from '../../src/engine/proof/reference-request.ts';
import { runReference } from '../../src/engine/reference/run-reference.ts';
import { DetectorRenderer } from '../../src/engine/renderer/detector-renderer.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { cpuSeconds, medianSeconds } from './median.ts';

/** The package brings a source of its own that the type checker trips over, so it is loaded as what it is. */
interface OdeSolver {
  absoluteTolerance: number;
  relativeTolerance: number;
  maxSteps: number;
  solve(slope: (x: number, y: number[]) => number[], x0: number, y0: number[], x1: number): { y: number[] };
}
const { Solver } = createRequire(import.meta.url)('odex') as { Solver: new (size: number) => OdeSolver };

const TONE_HERTZ = 1000;
const DEPTH = 0.8;
const SETTLE_SECONDS = 0.01;
const SAMPLES = 96;

/** What a tone costs by each way, seconds a second of programme, and how far each is from every cycle integrated. */
export interface YardstickFigures {
  readonly odeSeconds: number;
  readonly rendererSeconds: number;
  readonly odeDecibels: number;
  readonly rendererDecibels: number;
}

/**
 * The same averaged equations given to a general-purpose integrator: the circuit's network with its averaged laws by
 * quadrature, the carrier through the tuned circuit's pole, at the tolerance that leaves it no better than the renderer.
 *
 * @param rest  a circuit with a stiff source and a resistor load, so that every unknown has a derivative
 */
export async function againstOde(rest: RestPoint, tolerance: number): Promise<YardstickFigures> {
  const run = runReference(
    rest.circuit,
    { audioHertz: TONE_HERTZ, modulation: DEPTH, source: referenceSource(rest) },
    { settleSeconds: SETTLE_SECONDS, periods: 1 },
  );
  const reference = run.output.peaks[1] as number;
  let byOde = 0;
  const odeRun = await cpuSeconds(() => {
    byOde = odeTone(rest, tolerance);
  });
  const odeSeconds = odeRun / (SETTLE_SECONDS + 1 / TONE_HERTZ);

  const rate = 48_000;
  const laws = new TableStore().lawsFor(rest, 1);
  const renderer = new DetectorRenderer(rest, laws, rate);
  const from = SETTLE_SECONDS * rate + renderer.delaySamples;
  const frames = from + rate / TONE_HERTZ;
  const input = Float64Array.from(
    { length: frames },
    (_, n) => DEPTH * Math.sin((2 * Math.PI * TONE_HERTZ * n) / rate),
  );
  const output = new Float64Array(frames);
  renderer.process(input, output, frames);
  const byRenderer = harmonics(output.subarray(from), 1, 2).amplitudes[1] as number;
  // measured over a second of it, since one period is too short for the clock
  const long = new Float64Array(rate).map((_, n) => input[n % input.length] as number);
  const rendered = new Float64Array(rate);
  renderer.process(long, rendered, rate);
  const rendererSeconds = await medianSeconds(5, () => renderer.process(long, rendered, rate));
  const decibels = (value: number): number => 20 * Math.log10(value / reference);
  return { odeSeconds, rendererSeconds, odeDecibels: decibels(byOde), rendererDecibels: decibels(byRenderer) };
}

/** Peak volts of the tone at the output by the general-purpose integrator. */
function odeTone(rest: RestPoint, tolerance: number): number {
  const { system, gridNode, plateNode, output } = rest.audio;
  const n = system.size;
  const stage = new Stage(rest.laws, rest.path);
  const out = emptyCurrents();
  const pole = (Math.PI * rest.circuit.station.carrierHertz) / rest.tuned.loadedQ;
  const peak = rest.tuned.carrierPeakVolts;
  const inverse = new Float64Array(n * n);
  for (let k = 0; k < n; k++) inverse[k * n + k] = 1;
  solveReal(system.storage.slice(), n, inverse, n);
  const amps = new Float64Array(n);
  const slope = (seconds: number, y: number[]): number[] => {
    const envelope = y[n] as number;
    stage.evaluate(y[gridNode] as number, y[plateNode] as number, peak * Math.abs(envelope), out);
    for (let r = 0; r < n; r++) {
      let sum = system.drive[r] as number;
      for (let c = 0; c < n; c++) sum -= (system.conductance[r * n + c] as number) * (y[c] as number);
      amps[r] = sum;
    }
    amps[gridNode] = (amps[gridNode] as number) - out.gridAmps;
    amps[plateNode] = (amps[plateNode] as number) - out.plateAmps;
    const s = 1 + DEPTH * Math.sin(2 * Math.PI * TONE_HERTZ * seconds);
    return Array.from({ length: n + 1 }, (_, r) => {
      if (r === n) return pole * (s - envelope);
      let sum = 0;
      for (let c = 0; c < n; c++) sum += (inverse[r * n + c] as number) * (amps[c] as number);
      return sum;
    });
  };
  const solver = new Solver(n + 1);
  solver.absoluteTolerance = tolerance * 1e-3;
  solver.relativeTolerance = tolerance;
  solver.maxSteps = 10_000_000;
  let y = [...rest.unknowns, 1];
  y = solver.solve(slope, 0, y, SETTLE_SECONDS).y;
  const samples = new Float64Array(SAMPLES);
  const step = 1 / TONE_HERTZ / SAMPLES;
  for (let k = 0; k < SAMPLES; k++) {
    samples[k] = output.weight * (y[output.index] as number);
    const from = SETTLE_SECONDS + k * step;
    y = solver.solve(slope, from, y, from + step).y;
  }
  return harmonics(samples, 1, 2).amplitudes[1] as number;
}
